/*
 * A letter's body, written once for both forms of the mail. The words are Liquid: `{{ name }}` stands for a value of
 * the payload, and is escaped where the form is HTML.
 */
export type Block =
  | { kind: 'paragraph'; words: string; when?: string }
  /** Something a person wrote, kept apart from our own words and with its line breaks. */
  | { kind: 'quote'; heading: string; words: string; when?: string }
  | { kind: 'facts'; facts: { term: string; words: string }[] }
  | { kind: 'list'; heading: string; each: string; words: string; when?: string }
  | { kind: 'findings' }
  | { kind: 'link'; words: string }
  | { kind: 'caution' };

export interface Letter {
  subject: string;
  heading: string;
  blocks: Block[];
}

export const paragraph = (words: string, when?: string): Block => ({ kind: 'paragraph', words, when });
export const quote = (heading: string, words: string, when?: string): Block => ({
  kind: 'quote',
  heading,
  words,
  when,
});
export const facts = (...pairs: [term: string, words: string][]): Block => ({
  kind: 'facts',
  facts: pairs.map(([term, words]) => ({ term, words })),
});
export const list = (heading: string, each: string, words: string, when?: string): Block => ({
  kind: 'list',
  heading,
  each,
  words,
  when,
});
export const link = (words: string): Block => ({ kind: 'link', words });
