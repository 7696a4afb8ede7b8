import type { Drawing } from './drawings/drawing.ts';
import type { PrintedStep } from './quantity-words.ts';
import type { Tone } from './wording.ts';

/* What a working sheet is made of once it has words: the page, the PDF and the HTML file each lay out these and no others. */

export type SheetTableBlock = {
  kind: 'table';
  caption: string;
  columns: { label: string; isFigure: boolean }[];
  rows: string[][];
};

export type SheetBlock =
  | { kind: 'words'; text: string }
  | { kind: 'caution'; text: string }
  /** `tone` is the note’s, where that is a verdict; what stands under one that folds is folded away on the screen. */
  | { kind: 'heading'; text: string; id: string; note?: string; tone?: Tone; folds?: boolean }
  | { kind: 'facts'; facts: { term: string; value: string; isFigure?: boolean }[] }
  | SheetTableBlock
  | { kind: 'steps'; caption: string; steps: PrintedStep[]; folds?: boolean }
  /** With its numbers as a table, unless they stand beside it anyway. */
  | { kind: 'drawing'; drawing: Drawing; isTold?: boolean }
  /** Where the engineer in charge signs. */
  | { kind: 'signature'; lines: string[] };

export type SheetSection = { id: string; title: string; blocks: SheetBlock[] };

export type SheetPages = { title: string; reference: string; sections: SheetSection[] };
