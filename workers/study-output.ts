/**
 * Writes chunk after chunk, each when the one before has been taken: an exit right after a write would cut a pipe at
 * 64 KiB. Stops quietly when the reader has seen enough, as `head` does.
 */
export async function writeTo(stream: NodeJS.WriteStream, chunks: Iterable<string>): Promise<void> {
  const ignore = () => undefined; // the write's own callback is told as well
  stream.on('error', ignore);
  const encode = startEncoder();
  for (const chunk of chunks) {
    const error = await write(stream, encode(chunk));
    if (error?.code === 'EPIPE') return;
    if (error) throw error;
  }
  stream.off('error', ignore);
}

type WriteError = NodeJS.ErrnoException | null | undefined;

function write(stream: NodeJS.WriteStream, bytes: Uint8Array): Promise<WriteError> {
  return new Promise((done) => stream.write(bytes, done));
}

const usualBytes = 1024 * 1024;
const mostBytesPerUnit = 3;

/** Encodes into the same memory each time, which takes half as long as asking for new: use the bytes before the next call. */
function startEncoder(): (text: string) => Uint8Array {
  let memory: Buffer | undefined;
  return (text) => {
    if (text.length * mostBytesPerUnit > usualBytes) return Buffer.from(text);
    memory ??= Buffer.allocUnsafeSlow(usualBytes);
    return memory.subarray(0, memory.write(text));
  };
}
