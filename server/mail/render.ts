import { Liquid } from 'liquidjs';
import { formatDate } from '../../shared/format.ts';
import { describeFinding } from '../../shared/finding-words.ts';
import type { Stage } from '../../shared/rules/application-life.ts';
import type { AnswerSection } from '../../shared/schemas/answers.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import { caution, sectionWords, stageWords } from '../../shared/wording.ts';
import { layHtml } from './layout-html.ts';
import { layText } from './layout-text.ts';
import { letters } from './letters.ts';
import type { MailKind, MailPayload } from './messages.ts';

export interface Sender {
  /** The desk's address, without a closing slash. */
  publicUrl: string;
  utilityName: string;
  contactEmail: string;
}

export interface RenderedMail {
  subject: string;
  text: string;
  html: string;
}

/** A missing value is an error, and templates see plain values alone: nothing inherited, no files, no endless loops. */
function makeEngine(outputEscape?: 'escape'): Liquid {
  const engine = new Liquid({
    strictVariables: true,
    strictFilters: true,
    ownPropertyOnly: true,
    outputEscape,
    templates: {},
    parseLimit: 100_000,
    renderLimit: 2000,
    memoryLimit: 20_000_000,
  });
  engine.registerFilter('on', (date: string) => formatDate(date));
  engine.registerFilter('section_words', (section: AnswerSection) => sectionWords[section]);
  engine.registerFilter('stage_words', (stage: Stage) => stageWords[stage].label);
  engine.registerFilter('stage_meaning', (stage: Stage) => stageWords[stage].meaning);
  return engine;
}

const plain = makeEngine();
const escaping = makeEngine('escape');

/**
 * The reader's findings. Of a note only the words that the release wrote are kept, which say in general what is missing;
 * the engine's own stay out, for they may name what only the utility may know.
 */
function describeReleased(finding: Finding) {
  const { question, source, note, ...rest } = finding;
  const words = describeFinding({ question, source, ...rest });
  const names = words.isYesOrNo
    ? { valueName: 'Answer', limitName: 'Expected' }
    : { valueName: 'Computed', limitName: 'Limit' };
  const reason = finding.verdict === 'needs-data' ? (note ?? null) : null;
  return { question, source, verdict: finding.verdict, words, reason, ...names };
}

function makeScope<K extends MailKind>(kind: K, payload: MailPayload<K>, sender: Sender) {
  const findings = 'findings' in payload ? payload.findings.map(describeReleased) : [];
  return {
    ...payload,
    kind,
    findings,
    applicationUrl: `${sender.publicUrl}${payload.applicationPath}`,
    utilityName: sender.utilityName,
    contactEmail: sender.contactEmail,
    caution,
  };
}

/** One line, whatever was typed into a name. */
function toLine(text: string): string {
  return text.replace(/\s+/g, ' ').trim();
}

export function renderMail<K extends MailKind>(
  kind: K,
  payload: MailPayload<K>,
  sender: Sender,
): RenderedMail {
  const letter = letters[kind];
  const scope = makeScope(kind, payload, sender);
  const render = (engine: Liquid, source: string, more: object = {}) =>
    engine.parseAndRenderSync(source, { ...scope, ...more }) as string;
  const subject = toLine(render(plain, letter.subject));
  return {
    subject,
    text: render(plain, layText(letter)),
    html: render(escaping, layHtml(letter), { subject }),
  };
}
