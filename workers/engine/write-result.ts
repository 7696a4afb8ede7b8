import type { StudyResult } from '../../shared/schemas/study-result.ts';

/** Long enough that what each chunk costs besides does not count, short enough to stay in the processor's cache. */
const chunkLength = 256 * 1024;

/**
 * Writes a result as JSON and a line's end, in chunks of text: put together they are what JSON.stringify makes of the
 * whole. Members of the large objects are written one by one, so that the whole is never in memory as one text.
 */
export function* writeResult(result: StudyResult): Generator<string> {
  const { nodes, devices, lines } = result;
  const large = new Map<string, Members>(Object.entries({ nodes, devices, ...(lines ? { lines } : {}) }));
  let chunk = '';
  let mark = '{';
  for (const [key, value] of Object.entries(result)) {
    if (value === undefined) continue;
    chunk += `${mark}"${key}":`;
    mark = ',';
    const members = large.get(key);
    if (members === undefined || Object.keys(members).length === 0) chunk += JSON.stringify(value);
    else {
      let markOfMember = '{';
      for (const id of Object.keys(members)) {
        chunk += `${markOfMember}${JSON.stringify(id)}:${JSON.stringify(members[id])}`;
        markOfMember = ',';
        if (chunk.length < chunkLength) continue;
        yield chunk;
        chunk = '';
      }
      chunk += '}';
    }
  }
  yield `${chunk}}\n`;
}

type Members = Readonly<Record<string, unknown>>;
