import { inflateSync } from 'node:zlib';

const headerBytes = 44;
const entryBytes = 20;
const align = (length: number) => (length + 3) & ~3;

/**
 * Unpacks a WOFF 1.0 font (W3C Recommendation, 2012) to the sfnt that it was made from: a header, then tables, each deflated by itself where that
 * made it shorter. The PDF writer reads packed fonts too, but fails on some of their glyphs.
 */
export function unpackWoff(woff: Buffer): Buffer {
  if (woff.toString('latin1', 0, 4) !== 'wOFF') throw new Error('A font: got no WOFF file, expected one');
  const count = woff.readUInt16BE(12);
  const tables = Array.from({ length: count }, (_, index) => {
    const at = headerBytes + index * entryBytes;
    const [offset, packed, length] = [4, 8, 12].map((place) => woff.readUInt32BE(at + place)) as [
      number,
      number,
      number,
    ];
    const bytes = woff.subarray(offset, offset + packed);
    return {
      tag: woff.subarray(at, at + 4),
      checksum: woff.readUInt32BE(at + 16),
      bytes: packed < length ? inflateSync(bytes) : bytes,
    };
  });
  const header = Buffer.alloc(12 + 16 * count);
  woff.copy(header, 0, 4, 8);
  header.writeUInt16BE(count, 4);
  // Helps a binary search among the tables: 16 times the largest power of two that is not above their number.
  const power = Math.floor(Math.log2(count));
  header.writeUInt16BE(16 * 2 ** power, 6);
  header.writeUInt16BE(power, 8);
  header.writeUInt16BE(16 * count - 16 * 2 ** power, 10);
  let offset = header.length;
  const parts = tables.map(({ tag, checksum, bytes }, index) => {
    const at = 12 + 16 * index;
    tag.copy(header, at);
    [checksum, offset, bytes.length].forEach((value, place) =>
      header.writeUInt32BE(value, at + 4 + 4 * place),
    );
    offset += align(bytes.length);
    return Buffer.concat([bytes, Buffer.alloc(align(bytes.length) - bytes.length)]);
  });
  return Buffer.concat([header, ...parts]);
}
