import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Sheet } from '../../../shared/schemas/sheets.ts';
import type { SheetBlock } from '../../../shared/sheet-blocks.ts';
import { layOutSheet } from '../../../shared/sheet-layout.ts';
import { makePdf } from '../../../workers/documents/pdf.ts';
import { makeWorkingSheetHtml } from '../../../workers/documents/working-sheet-html.ts';
import { makeWorkingSheetPdf } from '../../../workers/documents/working-sheet-pdf.ts';
import { workStudy } from '../../../workers/engine/run-study.ts';
import { makeSheet } from '../../../workers/engine/sheet/make-sheet.ts';
import { readPdfText } from '../../support/pdf-text.ts';
import { readCase } from '../engine/cases.ts';

const hash = 'ab'.repeat(32);
const madeAt = new Date('2026-03-14T09:05:00Z');

function sheetOf(name: string): Sheet {
  const { result, worked } = workStudy(readCase(name), proFormaRuleSet);
  return makeSheet(result, worked!, {
    reference: 'MB-7',
    utility: 'Marrowbank Light & Power',
    studySha256: hash,
  });
}

/** What must be read: results of steps, cells, facts and words. */
function listTexts(block: SheetBlock): string[] {
  switch (block.kind) {
    case 'steps':
      return block.steps.flatMap(({ result, words }) => [result, words]);
    case 'table':
      return block.rows.flat();
    case 'facts':
      return block.facts.map(({ value }) => value);
    case 'drawing':
      // A limit line’s numbers stand in the facts below it.
      return block.isTold ? [] : block.drawing.table.rows.flat();
    case 'signature':
      return block.lines;
    default:
      return [block.text];
  }
}

/** Line ends and spaces are set by moving on; what no font has is spelt out. */
const squeeze = (text: string) =>
  text
    .replace(/√/g, 'sqrt')
    .replace(/≤/g, '<=')
    .replace(/[\s\u00a0]+/g, '');

describe('A working sheet on paper', () => {
  it('says on A4 and on Letter every number and word of the page, with page x of y', async () => {
    const sheet = sheetOf('marrow-lane');
    const texts = layOutSheet(sheet).sections.flatMap(({ blocks, title }) => [
      title,
      ...blocks.flatMap(listTexts),
    ]);
    expect(texts.length).toBeGreaterThan(200);
    for (const paper of ['a4', 'letter'] as const) {
      const pdf = Buffer.from(await makeWorkingSheetPdf(sheet, paper, madeAt));
      const printed = squeeze(readPdfText(pdf));
      const missing = texts.filter((text) => !printed.includes(squeeze(text)));
      expect(missing).toEqual([]);
      const pages = /page1of(\d+)/.exec(printed)?.[1];
      expect(Number(pages)).toBeGreaterThan(3);
      expect(printed).toContain(`page${pages}of${pages}`);
      const box = /\/MediaBox \[0 0 ([\d.]+) ([\d.]+)\]/.exec(pdf.toString('latin1'));
      expect(Math.round(Number(box?.[1]))).toBe(paper === 'a4' ? 595 : 612);
    }
  });

  it('opens neither files nor addresses, whatever its content asks for', async () => {
    for (const image of ['/etc/hostname', 'package.json']) {
      const sheet = { header: '', footer: '', title: '', author: '', content: [{ image }], madeAt };
      await expect(makePdf(sheet, 'a4')).rejects.toThrow('denied by resource access policy');
    }
  });

  it('is the same bytes for the same sheet and date', async () => {
    const [once, again] = await Promise.all(
      [1, 2].map(() => makeWorkingSheetPdf(sheetOf('fallow-bridge'), 'letter', madeAt)),
    );
    expect(Buffer.from(once!).equals(Buffer.from(again!))).toBe(true);
  });

  it('holds markup that somebody typed as text, and asks nothing of anywhere', () => {
    const sheet = { ...sheetOf('marrow-lane'), warnings: ['<img src=x onerror=alert(1)> & "so on"'] };
    const html = makeWorkingSheetHtml(sheet);
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt; &amp; &quot;so on&quot;');
    expect(html).not.toMatch(/<img|<script|<link|@import|url\(|(src|href)="(?!#)/);
    const ids = [...html.matchAll(/ id="([^"]+)"/g)].map(([, id]) => id);
    expect(new Set(ids).size).toBe(ids.length);
  });
});
