import { inflateSync } from 'node:zlib';

/* Reads the text of a PDF as Chromium and pdfkit write it: fonts by glyph number, each with its table back to characters. */

interface Font {
  /** Hexadecimal digits of a glyph's number: fonts drawn as pictures (Type 3) have one byte, all others two. */
  digits: 2 | 4;
  glyphs: Map<number, string>;
}

const fromHex = (hex: string) => Number.parseInt(hex, 16);

/** UTF-16 code units in hexadecimal. */
function readCharacters(hex: string): string {
  return (hex.match(/.{4}/g) ?? []).map((unit) => String.fromCharCode(fromHex(unit))).join('');
}

function readGlyphs(table: string): Font['glyphs'] {
  const glyphs: Font['glyphs'] = new Map();
  for (const [, block] of table.matchAll(/beginbfchar(.*?)endbfchar/gs)) {
    for (const [, glyph, characters] of block!.matchAll(/<(\w+)>\s*<(\w+)>/g)) {
      glyphs.set(fromHex(glyph!), readCharacters(characters!));
    }
  }
  for (const [, block] of table.matchAll(/beginbfrange(.*?)endbfrange/gs)) {
    for (const [, first, list] of block!.matchAll(/<(\w+)>\s*<\w+>\s*\[(.*?)\]/gs)) {
      // One glyph may stand for several characters: <0066 0069> is a ligature.
      const characters = (list!.match(/<[^>]*>/g) ?? []).map((each) => each.replace(/[^0-9A-Fa-f]/g, ''));
      characters.forEach((each, place) => glyphs.set(fromHex(first!) + place, readCharacters(each)));
    }
    for (const [, first, last, start] of block!
      .replace(/\[.*?\]/gs, '')
      .matchAll(/<(\w+)>\s*<(\w+)>\s*<(\w+)>/g)) {
      for (let glyph = fromHex(first!); glyph <= fromHex(last!); glyph += 1) {
        glyphs.set(glyph, String.fromCharCode(fromHex(start!) + glyph - fromHex(first!)));
      }
    }
  }
  return glyphs;
}

/** Object number → its dictionary and, inflated, its stream. */
function readObjects(pdf: Buffer): Map<number, { head: string; stream: string }> {
  const objects = new Map<number, { head: string; stream: string }>();
  const text = pdf.toString('latin1');
  for (const match of text.matchAll(/(\d+) 0 obj\r?\n(.*?)endobj/gs)) {
    const [, number, body] = match;
    const at = body!.search(/stream\r?\n/);
    if (at < 0) {
      objects.set(Number(number), { head: body!, stream: '' });
      continue;
    }
    const head = body!.slice(0, at);
    const bytes = Buffer.from(body!.slice(at).replace(/^stream\r?\n/, ''), 'latin1');
    const isText = /FlateDecode/.test(head) && !/Image|FontFile|Length1/.test(head);
    objects.set(Number(number), { head, stream: isText ? inflateSync(bytes).toString('latin1') : '' });
  }
  return objects;
}

function readContent(content: string, fonts: Map<string, Font>): string {
  let font: Font = { digits: 4, glyphs: new Map() };
  let text = '';
  for (const [, name, shown, end] of content.matchAll(/\/(F\d+) [\d.]+ Tf|<([0-9A-Fa-f]+)>|\b(ET)\b/g)) {
    if (name !== undefined) font = fonts.get(name) ?? font;
    else if (end !== undefined) text += '\n';
    else {
      const glyphs = shown!.match(new RegExp(`.{${font.digits}}`, 'g')) ?? [];
      text += glyphs.map((glyph) => font.glyphs.get(fromHex(glyph)) ?? '?').join('');
    }
  }
  return text;
}

export function readPdfText(pdf: Buffer): string {
  const objects = readObjects(pdf);
  const fonts = new Map<string, Font>();
  for (const { head } of objects.values()) {
    for (const [, name, number] of head.matchAll(/\/(F\d+) (\d+) 0 R/g)) {
      const fontHead = objects.get(Number(number))?.head ?? '';
      const table = /ToUnicode (\d+) 0 R/.exec(fontHead)?.[1];
      const glyphs = readGlyphs(objects.get(Number(table))?.stream ?? '');
      fonts.set(name!, { digits: fontHead.includes('/Type3') ? 2 : 4, glyphs });
    }
  }
  const pages = [...objects.values()].filter(({ stream }) => /\bTf\b/.test(stream));
  return pages.map(({ stream }) => readContent(stream, fonts)).join('\n');
}
