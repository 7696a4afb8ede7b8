import { createHash } from 'node:crypto';
import { rmSync } from 'node:fs';
import { createConnection, createServer, type Server } from 'node:net';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';

/** A socket's path may have 107 bytes: a deep checkout gets one under the temporary directory instead. */
export function socketPath(dataDir: string, name: string): string {
  const path = join(resolve(dataDir), name);
  if (Buffer.byteLength(path) <= 107) return path;
  const mark = createHash('sha256').update(path).digest('hex').slice(0, 16);
  return join(tmpdir(), `feederwright-${mark}-${name}`);
}

/** What the one who holds the data directory says of itself, or undefined when nobody holds it. */
export function askHolder(dataDir: string): Promise<string | undefined> {
  return new Promise((resolve) => {
    let text = '';
    const socket = createConnection({ path: socketPath(dataDir, 'supervisor.sock') });
    socket.on('data', (bytes) => (text += bytes.toString('utf8')));
    socket.once('end', () => resolve(text));
    socket.once('error', () => resolve(undefined));
  });
}

export interface Claim {
  describe(text: string): void;
  release(): Promise<void>;
}

function listen(server: Server, path: string): Promise<boolean> {
  return new Promise((resolve, reject) => {
    server.once('error', (error: NodeJS.ErrnoException) =>
      error.code === 'EADDRINUSE' ? resolve(false) : reject(error),
    );
    server.listen({ path }, () => resolve(true));
  });
}

/**
 * One supervisor to a data directory. A listening socket ends with its process, so that one which nobody
 * answers on was left by a kill. Gives undefined when somebody holds the directory.
 */
export async function claimDirectory(dataDir: string): Promise<Claim | undefined> {
  const path = socketPath(dataDir, 'supervisor.sock');
  let description = 'starting';
  const server = createServer((socket) => {
    socket.on('error', () => socket.destroy());
    socket.end(description);
  });
  if (!(await listen(server, path))) {
    if ((await askHolder(dataDir)) !== undefined) return undefined;
    rmSync(path, { force: true });
    if (!(await listen(server, path))) return undefined;
  }
  return {
    describe: (text) => (description = text),
    release: () => new Promise((resolve) => server.close(() => resolve())),
  };
}
