import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import type * as PdfMake from 'pdfmake';
import { unpackWoff } from './woff.ts';
import type { Content, TDocumentDefinitions } from 'pdfmake/interfaces';

/*
 * The house's PDF: IBM Plex and Zilla Slab, page numbers, and no way out: pdfmake may open neither files nor addresses, so
 * that nothing which somebody typed can make it fetch anything. The fonts are handed over as bytes.
 */

export type Paper = 'a4' | 'letter';

/** The study command may be one file that is nowhere on the disk: its packages are then those of what was started. */
const require = createRequire(import.meta.url.startsWith('file:') ? import.meta.url : process.argv[1]!);

/**
 * By the names under which they are kept in memory: drawings find a font by its own (PostScript) name alone. Each file holds
 * one script: Greek letters (Ω) are in one of their own, and √ ≤ ≥ ∠ ∥ in none.
 */
const fontFiles = {
  'IBMPlexSans-Regular': '@fontsource/ibm-plex-sans/files/ibm-plex-sans-latin-400-normal.woff',
  'IBMPlexSans-SemiBold': '@fontsource/ibm-plex-sans/files/ibm-plex-sans-latin-600-normal.woff',
  'IBMPlexSans-Greek': '@fontsource/ibm-plex-sans/files/ibm-plex-sans-greek-400-normal.woff',
  'IBMPlexMono-Regular': '@fontsource/ibm-plex-mono/files/ibm-plex-mono-latin-400-normal.woff',
  'ZillaSlab-SemiBold': '@fontsource/zilla-slab/files/zilla-slab-latin-600-normal.woff',
} as const;

type FontName = keyof typeof fontFiles;

/** Its types leave out the files that it keeps in memory. */
type PdfMaker = typeof PdfMake & {
  virtualfs: { writeFileSync(name: string, bytes: Uint8Array): void };
};

let ready: PdfMaker | undefined;

/** Once a process; the writer of documents is large, and loaded by the first document. */
function getPdfMaker(): PdfMaker {
  if (ready) return ready;
  const pdfmake = require('pdfmake') as PdfMaker;
  for (const [name, file] of Object.entries(fontFiles)) {
    pdfmake.virtualfs.writeFileSync(name, unpackWoff(readFileSync(require.resolve(file))));
  }
  const face = (normal: FontName, bold: FontName = normal) => {
    return { normal, bold, italics: normal, bolditalics: bold };
  };
  pdfmake.setFonts({
    Sans: face('IBMPlexSans-Regular', 'IBMPlexSans-SemiBold'),
    Greek: face('IBMPlexSans-Greek'),
    Mono: face('IBMPlexMono-Regular'),
    Slab: face('ZillaSlab-SemiBold'),
  });
  pdfmake.setUrlAccessPolicy(() => false);
  pdfmake.setLocalAccessPolicy(() => false);
  return (ready = pdfmake);
}

const spelt: Readonly<Record<string, string>> = {
  '√': 'sqrt',
  '≤': '<=',
  '≥': '>=',
  '∠': ' at angle ',
  '∥': ' in parallel with ',
};

/** Text for a content node: signs that no font has are spelt out, Greek letters get the font that has them. */
export function printable(text: string): Content {
  const plain = text.replace(/[√≤≥∠∥]/g, (sign) => spelt[sign]!);
  if (!/[\u0370-\u03ff]/.test(plain)) return plain;
  return plain
    .split(/([\u0370-\u03ff]+)/)
    .filter((part) => part !== '')
    .map((part) => (/[\u0370-\u03ff]/.test(part) ? { text: part, font: 'Greek' } : { text: part }));
}

/** Inks of the surveyor's sheet, as on the screen. */
export const inks = { ink: '#1f1a14', soft: '#5d5448', copper: '#9a4f1c', line: '#b9ad9a' } as const;

export interface Sheet {
  /** What stands at the head of every page: reference and title. */
  header: string;
  /** At the foot, before "page x of y": cautions in one line. */
  footer: string;
  title: string;
  author: string;
  content: Content[];
  /** Of the file's own record; the same sheet and date give the same bytes. */
  madeAt: Date;
}

const millimetre = 72 / 25.4;

function define(sheet: Sheet, paper: Paper): TDocumentDefinitions {
  const [side, top] = [18 * millimetre, 22 * millimetre];
  return {
    pageSize: paper === 'a4' ? 'A4' : 'LETTER',
    pageMargins: [side, top, side, 20 * millimetre],
    info: {
      title: sheet.title,
      author: sheet.author,
      creator: 'Feederwright',
      producer: 'Feederwright',
      creationDate: sheet.madeAt,
    },
    defaultStyle: { font: 'Sans', fontSize: 9.5, lineHeight: 1.25, color: inks.ink },
    styles: {
      title: { font: 'Slab', fontSize: 20, lineHeight: 1.1, margin: [0, 0, 0, 4] },
      heading: { font: 'Slab', fontSize: 13, margin: [0, 14, 0, 4] },
      subheading: { font: 'Slab', fontSize: 10.5, margin: [0, 8, 0, 2] },
      figure: { font: 'Mono', fontSize: 8.5 },
      soft: { color: inks.soft, fontSize: 8.5 },
      head: { font: 'Slab', fontSize: 8.5 },
    },
    header: {
      columns: [
        { text: printable(sheet.header), style: 'soft' },
        { text: sheet.author, style: 'soft', alignment: 'right' },
      ],
      margin: [side, 10 * millimetre, side, 0],
    },
    footer: (page, pages) => ({
      columns: [
        { text: printable(sheet.footer), style: 'soft', width: '*' },
        { text: `page ${page} of ${pages}`, style: 'soft', width: 'auto', alignment: 'right' },
      ],
      columnGap: 16,
      margin: [side, 8, side, 0],
    }),
    content: sheet.content,
  };
}

/** Rules above and below the head and between rows, none upright. */
export const ruled = {
  hLineWidth: (row: number) => (row <= 1 ? 0.8 : 0.4),
  vLineWidth: () => 0,
  hLineColor: (row: number) => (row <= 1 ? inks.ink : inks.line),
  paddingTop: () => 2.5,
  paddingBottom: () => 2.5,
};

/** The file's bytes. */
export async function makePdf(sheet: Sheet, paper: Paper): Promise<Uint8Array> {
  return getPdfMaker().createPdf(define(sheet, paper)).getBuffer();
}
