import type { Content, TableCell } from 'pdfmake/interfaces';
import { writeSvg, type Drawing } from '../../shared/drawings/drawing.ts';
import type { FormulaPiece, PrintedStep } from '../../shared/quantity-words.ts';
import type { Sheet } from '../../shared/schemas/sheets.ts';
import type { SheetBlock, SheetSection, SheetTableBlock } from '../../shared/sheet-blocks.ts';
import { layOutSheet } from '../../shared/sheet-layout.ts';
import { inks, makePdf, printable, ruled, type Paper } from './pdf.ts';

/** The working sheet on paper: the words and drawings of the page, section by section. */
export function makeWorkingSheetPdf(sheet: Sheet, paper: Paper, madeAt: Date): Promise<Uint8Array> {
  const { title, reference, sections } = layOutSheet(sheet);
  const content: Content[] = [
    { text: title, style: 'title' },
    { text: printable(reference), margin: [0, 0, 0, 8] },
    ...sections.flatMap(layOutSection),
  ];
  return makePdf(
    {
      header: `${title} · ${reference}`,
      footer: 'In support of engineering judgement; a licensed engineer decides.',
      title: `${title}, ${reference}`,
      author: sheet.origin.utility ?? '',
      content,
      madeAt,
    },
    paper,
  );
}

/** As many rows as a table may have and still be moved to the next page with its heading. */
const fewRows = 5;

function isLong(block: SheetBlock): boolean {
  return (
    (block.kind === 'table' && block.rows.length > fewRows) ||
    (block.kind === 'steps' && block.steps.length > fewRows)
  );
}

/** What belongs to the block after it: a heading, and a limit line, which its facts tell. */
const leadsOn = (block: SheetBlock) =>
  block.kind === 'heading' || (block.kind === 'drawing' && block.isTold === true);

/** Headings go to the next page with what they stand over, unless that is a table that may be longer than a page. */
function layOutSection({ title, blocks }: SheetSection): Content[] {
  const content: Content[] = [];
  let held: Content[] = [{ text: title, style: 'heading' }];
  for (const block of blocks) {
    const [first, ...rest] = layOutBlock(block);
    if (leadsOn(block)) {
      held.push(first!, ...rest);
      continue;
    }
    if (held.length === 0) content.push(first!, ...rest);
    else if (isLong(block)) content.push(...held, first!, ...rest);
    else content.push({ unbreakable: true, stack: [...held, first!] }, ...rest);
    held = [];
  }
  return [...content, ...held];
}

function layOutBlock(block: SheetBlock): Content[] {
  switch (block.kind) {
    case 'words':
      return [{ stack: [{ text: printable(block.text) }], unbreakable: true, margin: [0, 3, 0, 3] }];
    case 'caution':
      return [{ text: printable(block.text), style: 'soft', margin: [8, 4, 0, 4] }];
    case 'heading':
      return [
        { text: printable(block.text), style: 'subheading' },
        ...(block.note === undefined ? [] : [{ text: printable(block.note), style: 'soft' }]),
      ];
    case 'facts':
      return [layOutFacts(block.facts)];
    case 'table':
      return [layOutTable(block)];
    case 'steps':
      return [layOutSteps(block.caption, block.steps)];
    case 'drawing':
      return layOutDrawing(block.drawing, block.isTold ?? false);
    case 'signature':
      return [layOutSignature(block.lines)];
  }
}

type Facts = Extract<SheetBlock, { kind: 'facts' }>['facts'];

/** Short figures, those of a finding, stand side by side above the other facts. */
function layOutFacts(facts: Facts): Content {
  const short = facts.filter(({ value, isFigure }) => isFigure && value.length <= 22);
  if (short.length < 2) return listFacts(facts);
  const beside = short.map(({ term, value }) => ({
    width: 120,
    stack: [
      { text: printable(term), style: 'soft' },
      { text: printable(value), style: 'figure' },
    ],
  }));
  const others = facts.filter((fact) => !short.includes(fact));
  return {
    stack: [{ columns: beside, margin: [2, 2, 0, 0] }, ...(others.length > 0 ? [listFacts(others)] : [])],
  };
}

function listFacts(facts: Facts): Content {
  return {
    layout: 'noBorders',
    margin: [0, 2, 0, 4],
    table: {
      dontBreakRows: true,
      widths: [120, '*'],
      body: facts.map(({ term, value, isFigure }) => [
        { text: printable(term), color: inks.soft },
        { text: printable(value), ...(isFigure && { style: 'figure' }) },
      ]),
    },
  };
}

const head = (label: string, isFigure: boolean): TableCell => ({
  text: printable(label),
  style: 'head',
  alignment: isFigure ? 'right' : 'left',
});

const shortest = 14;

function layOutTable({ caption, columns, rows }: Omit<SheetTableBlock, 'kind'>): Content {
  const size = columns.length > 6 ? 7 : 8;
  const isDense = rows.length > 20;
  return {
    layout: isDense ? { ...ruled, paddingTop: () => 1, paddingBottom: () => 0.5 } : ruled,
    margin: [0, 4, 0, 6],
    table: {
      headerRows: 2,
      keepWithHeaderRows: 1,
      dontBreakRows: true,
      widths: columns.map(({ isFigure }) => (isFigure ? 'auto' : '*')),
      body: [
        [
          { text: printable(caption), style: 'head', colSpan: columns.length },
          ...columns.slice(1).map(() => ''),
        ],
        columns.map(({ label, isFigure }) => head(label, isFigure)),
        ...rows.map((row) =>
          row.map((value, index) => {
            const isFigure = columns[index]!.isFigure;
            return {
              text: printable(value),
              fontSize: size,
              ...(isDense && { lineHeight: 1.05 }),
              // Ids and figures stay on one line.
              noWrap: value.length <= shortest,
              ...(isFigure && { font: 'Mono', alignment: 'right' as const }),
            };
          }),
        ),
      ],
    },
  };
}

/** A symbol or formula with its indices and powers; pdfmake sets those at 0.58 of their size, too small to read. */
function typeset(pieces: readonly FormulaPiece[], fontSize: number): Content[] {
  return pieces.map(({ text, place }) => ({
    text: printable(text),
    ...(place !== 'line' && { fontSize: fontSize * 1.25 }),
    ...(place === 'below' && { sub: true }),
    ...(place === 'above' && { sup: true }),
  }));
}

function layOutSteps(caption: string, steps: readonly PrintedStep[]): Content {
  return {
    layout: ruled,
    margin: [0, 4, 0, 6],
    table: {
      headerRows: 1,
      dontBreakRows: true,
      keepWithHeaderRows: 1,
      widths: ['*', 118],
      body: [[head(caption, false), head('Result', true)], ...steps.map(layOutStep)],
    },
  };
}

function layOutStep({ words, symbol, formula, inputs, result }: PrintedStep): TableCell[] {
  const inputWords = inputs.flatMap((input, index): Content[] => [
    ...(index > 0 ? [{ text: ';  ' }] : []),
    ...typeset(input.symbol, 7.5),
    { text: printable(` = ${input.value}`) },
  ]);
  const shown: Content[] = [{ text: printable(words), fontSize: 8.5 }];
  if (formula !== null) {
    shown.push({ text: [...typeset(symbol, 8), ' = ', ...typeset(formula, 8)], font: 'Mono', fontSize: 8 });
    shown.push({ text: inputWords, font: 'Mono', fontSize: 7.5, color: inks.soft });
  }
  return [
    { stack: shown },
    {
      text: [...typeset(symbol, 8), ' = ', { text: printable(result) }],
      font: 'Mono',
      fontSize: 8,
      alignment: 'right',
    },
  ];
}

/** Paper is 174 mm wide between its margins at least: 468 points on Letter's 612 less 2 · 51. */
const drawnWidth = 440;

function layOutDrawing(drawing: Drawing, isTold: boolean): Content[] {
  const svg = writeSvg(drawing, 'drawing')
    .replaceAll('IBM Plex Sans', 'Sans')
    .replaceAll('IBM Plex Mono', 'Mono');
  const scale = Math.min(drawnWidth / drawing.width, 600 / drawing.height);
  return [
    {
      unbreakable: true,
      margin: [0, 6, 0, 2],
      stack: [
        ...(isTold ? [] : [{ text: printable(drawing.title), style: 'head' }]),
        { svg, width: drawing.width * scale, height: drawing.height * scale, margin: [0, 4, 0, 2] },
        ...(isTold ? [] : [{ text: printable(drawing.description), style: 'soft' }]),
      ],
    },
    ...(isTold ? [] : [layOutTable({ caption: drawing.title, ...drawing.table })]),
  ];
}

function layOutSignature(lines: readonly string[]): Content {
  return {
    unbreakable: true,
    margin: [0, 40, 0, 0],
    columnGap: 24,
    columns: lines.map((label) => ({
      stack: [
        {
          canvas: [
            { type: 'line' as const, x1: 0, y1: 0, x2: 140, y2: 0, lineWidth: 0.8, lineColor: inks.ink },
          ],
        },
        { text: label, style: 'soft', margin: [0, 3, 0, 0] as [number, number, number, number] },
      ],
    })),
  };
}
