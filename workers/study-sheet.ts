import { createHash } from 'node:crypto';
import { writeFileSync } from 'node:fs';
import { extname, resolve } from 'node:path';
import type { SheetOrigin } from '../shared/schemas/sheets.ts';
import type { StudyResult } from '../shared/schemas/study-result.ts';
import { escapeText } from './engine/problems.ts';
import type { Worked } from './engine/sheet/make-sheet.ts';
import { makeSheet } from './engine/sheet/make-sheet.ts';
import { writeResult } from './engine/write-result.ts';
import { callersFolder, InputError } from './study-input.ts';

/* The working sheet of the command line: a PDF or an HTML file, by the name that is asked for. */

type SheetFile = { file: string; paper: 'a4' | 'letter' };

/** The writers of documents are large, so each is loaded where it is asked for. */
const writers: Record<
  string,
  (sheet: ReturnType<typeof makeSheet>, paper: SheetFile['paper']) => Promise<Uint8Array | string>
> = {
  '.pdf': async (sheet, paper) =>
    (await import('./documents/working-sheet-pdf.ts')).makeWorkingSheetPdf(sheet, paper, new Date()),
  '.html': async (sheet) => (await import('./documents/working-sheet-html.ts')).makeWorkingSheetHtml(sheet),
};

/** Asked before anything is computed. */
export function checkSheetFile({ file }: SheetFile): void {
  if (extname(file) in writers) return;
  throw new InputError(`--sheet: got ${escapeText(file)}, expected a name that ends in .pdf or .html`);
}

export async function writeSheetFile(
  { file, paper }: SheetFile,
  { result, worked }: { result: StudyResult; worked: Worked | undefined },
  studySha256: string,
): Promise<void> {
  if (!worked) throw new InputError('--sheet: got a study without a project, expected one with a project');
  const origin: SheetOrigin = { studySha256, resultSha256: hashResult(result) };
  const content = await writers[extname(file)]!(makeSheet(result, worked, origin), paper);
  try {
    writeFileSync(resolve(callersFolder(), file), content);
  } catch (error) {
    const got = (error as NodeJS.ErrnoException).code ?? 'an error';
    throw new InputError(`${escapeText(file)}: got ${got}, expected a file that can be written`);
  }
}

function hashResult(result: StudyResult): string {
  const hash = createHash('sha256');
  for (const chunk of writeResult(result)) hash.update(chunk);
  return hash.digest('hex');
}
