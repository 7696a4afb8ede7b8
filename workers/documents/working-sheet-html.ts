import { escapeMarkup, writeSvg, type Drawing } from '../../shared/drawings/drawing.ts';
import type { FormulaPiece, PrintedStep } from '../../shared/quantity-words.ts';
import type { Sheet } from '../../shared/schemas/sheets.ts';
import type { SheetBlock, SheetSection, SheetTableBlock } from '../../shared/sheet-blocks.ts';
import { layOutSheet } from '../../shared/sheet-layout.ts';

/* The working sheet as one HTML file that needs nothing else: no script, no address, its drawings within. */

const style = `
:root { color-scheme: light; }
body { margin: 2rem auto; max-width: 56rem; padding: 0 1rem; background: #faf6ec; color: #221f1a;
  font: 1rem/1.5 'IBM Plex Sans', 'Helvetica Neue', Arial, sans-serif; }
h1, h2, h3 { font-family: 'Zilla Slab', Rockwell, serif; line-height: 1.2; break-after: avoid; }
h2 { margin-top: 2.5rem; border-top: 2px solid #221f1a; padding-top: .5rem; }
table { width: 100%; border-collapse: collapse; margin: 1rem 0; font-size: .875rem; border-bottom: 1px solid #221f1a; }
caption { text-align: left; font-weight: 600; padding-bottom: .25rem; }
thead { border-top: 3px double #221f1a; border-bottom: 1px solid #221f1a; }
th, td { padding: .3rem .75rem .3rem 0; text-align: left; vertical-align: baseline; }
tbody tr + tr { border-top: 1px solid #cfc2a3; }
.figure { font-family: 'IBM Plex Mono', Consolas, monospace; font-variant-numeric: tabular-nums; }
th.figure, td.figure { text-align: right; }
.soft, figcaption, .caution { color: #595146; font-size: .875rem; }
.caution { border-left: 3px double #837654; padding-left: 1rem; }
figure { margin: 1rem 0; break-inside: avoid; } svg { max-width: 100%; height: auto; background: #fff; }
dl { display: grid; grid-template-columns: minmax(9rem, auto) 1fr; gap: .2rem 1.5rem; }
dt { color: #595146; } dd { margin: 0; overflow-wrap: anywhere; }
.signature { display: flex; gap: 2rem; margin-top: 4rem; } .signature span { flex: 1; border-top: 1px solid #221f1a; }
@media print { body { margin: 0; max-width: none; background: #fff; color: #000; } thead { display: table-header-group; }
  tr { break-inside: avoid; } nav { display: none; } @page { margin: 18mm 16mm 20mm; } }
`;

const e = escapeMarkup;

/** The whole file. */
export function makeWorkingSheetHtml(sheet: Sheet): string {
  const { title, reference, sections } = layOutSheet(sheet);
  let drawings = 0;
  const write = (section: SheetSection) =>
    `<section aria-labelledby="${section.id}"><h2 id="${section.id}">${e(section.title)}</h2>\n${section.blocks
      .map((block) => writeBlock(block, () => `drawing-${++drawings}`))
      .join('\n')}</section>`;
  const contents = sections.map(({ id, title: name }) => `<li><a href="#${id}">${e(name)}</a></li>`).join('');
  return `<!doctype html>
<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">
<title>${e(`${title}, ${reference}`)}</title><style>${style}</style></head>
<body><h1>${e(title)}</h1><p>${e(reference)}</p><nav aria-label="Contents"><ol>${contents}</ol></nav>
<main>${sections.map(write).join('\n')}</main></body></html>
`;
}

function writeBlock(block: SheetBlock, nextId: () => string): string {
  switch (block.kind) {
    case 'words':
      return `<p>${e(block.text)}</p>`;
    case 'caution':
      return `<p class="caution">${e(block.text)}</p>`;
    case 'heading': {
      const note = block.note === undefined ? '' : `<p class="soft">${e(block.note)}</p>`;
      return `<h3 id="${e(block.id)}">${e(block.text)}</h3>${note}`;
    }
    case 'facts':
      return `<dl>${block.facts
        .map(
          ({ term, value, isFigure }) =>
            `<dt>${e(term)}</dt><dd${isFigure ? ' class="figure"' : ''}>${e(value)}</dd>`,
        )
        .join('')}</dl>`;
    case 'table':
      return writeTable(block);
    case 'steps':
      return writeSteps(block.caption, block.steps);
    case 'drawing':
      return writeDrawing(block.drawing, nextId(), block.isTold ?? false);
    case 'signature':
      return `<p class="signature">${block.lines.map((label) => `<span>${e(label)}</span>`).join('')}</p>`;
  }
}

function writeTable({ caption, columns, rows }: Omit<SheetTableBlock, 'kind'>): string {
  const figure = (index: number) => (columns[index]!.isFigure ? ' class="figure"' : '');
  const head = columns.map(({ label }, index) => `<th scope="col"${figure(index)}>${e(label)}</th>`).join('');
  const body = rows.map(
    (row) => `<tr>${row.map((value, index) => `<td${figure(index)}>${e(value)}</td>`).join('')}</tr>`,
  );
  return `<table><caption>${e(caption)}</caption><thead><tr>${head}</tr></thead><tbody>${body.join('\n')}</tbody></table>`;
}

const tags = { line: ['', ''], below: ['<sub>', '</sub>'], above: ['<sup>', '</sup>'] } as const;

function typeset(pieces: readonly FormulaPiece[]): string {
  return pieces.map(({ text, place }) => `${tags[place][0]}${e(text)}${tags[place][1]}`).join('');
}

function writeSteps(caption: string, steps: readonly PrintedStep[]): string {
  const rows = steps.map(({ words, symbol, formula, inputs, result }) => {
    const given = inputs.map((input) => `${typeset(input.symbol)} = ${e(input.value)}`).join('; ');
    const shown =
      formula === null
        ? ''
        : `<br><span class="figure">${typeset(symbol)} = ${typeset(formula)}</span><br><span class="figure soft">${given}</span>`;
    return `<tr><td>${e(words)}${shown}</td><td class="figure">${typeset(symbol)} = ${e(result)}</td></tr>`;
  });
  return `<table><caption>${e(caption)}</caption><thead><tr><th scope="col">Step</th><th scope="col" class="figure">Result</th></tr></thead><tbody>${rows.join('\n')}</tbody></table>`;
}

function writeDrawing(drawing: Drawing, id: string, isTold: boolean): string {
  const table = isTold ? '' : writeTable({ caption: drawing.title, ...drawing.table });
  const told = isTold ? '' : `<figcaption>${e(drawing.description)}</figcaption>`;
  return `<figure>${writeSvg(drawing, id)}${told}</figure>${table}`;
}
