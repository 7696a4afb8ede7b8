import { isAscii } from 'node:buffer';
import { Problems } from './engine/problems.ts';

/** Reads bytes as UTF-8; a byte order mark in front is dropped. */
export function decodeText(bytes: Uint8Array): { text: string } | { problems: Problems } {
  try {
    // Nearly all files are ASCII, which takes no more than a copy and parses fastest.
    if (isAscii(bytes)) return { text: asBuffer(bytes).toString('latin1') };
    return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes) };
  } catch (error) {
    const isLong = !(error instanceof TypeError);
    const problems = new Problems();
    problems.push({
      pointer: '/',
      got: isLong ? `${bytes.length} bytes` : 'bytes that are no text in UTF-8',
      expected: isLong ? 'fewer than the longest text can have' : 'a file in UTF-8',
    });
    return { problems };
  }
}

/** The same bytes, not a copy. */
function asBuffer({ buffer, byteOffset, byteLength }: Uint8Array): Buffer {
  return Buffer.from(buffer, byteOffset, byteLength);
}
