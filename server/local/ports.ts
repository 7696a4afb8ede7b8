import { createConnection, createServer } from 'node:net';

const triedPorts = 200;

export interface ReservedPort {
  port: number;
  /** To be called just before the program that is to listen there is started. */
  release(): Promise<void>;
}

/** Listens there, so that nobody else takes it meanwhile; undefined when somebody listens on it already. */
export function tryReservePort(port: number): Promise<ReservedPort | undefined> {
  return new Promise((resolve) => {
    const server = createServer((socket) => socket.destroy());
    server.once('error', () => resolve(undefined));
    server.listen({ port, host: '127.0.0.1', exclusive: true }, () => {
      server.unref();
      resolve({ port, release: () => new Promise((done) => server.close(() => done())) });
    });
  });
}

/** The first port after the busy one that nobody listens on and that is not meant for something else. */
export async function reserveNextPort(busy: number, meant: ReadonlySet<number>): Promise<ReservedPort> {
  const end = Math.min(busy + triedPorts, 65535);
  for (let port = busy + 1; port <= end; port += 1) {
    const reserved = meant.has(port) ? undefined : await tryReservePort(port);
    if (reserved !== undefined) return reserved;
  }
  throw new Error(`Ports ${busy} to ${end} are all busy, expected one that is free`);
}

/** Any port, by leave of the system: for tests, which must not meet each other. */
export function findAnyPort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen({ port: 0, host: '127.0.0.1' }, () => {
      const address = probe.address();
      probe.close(() => (typeof address === 'object' && address ? resolve(address.port) : reject(address)));
    });
  });
}

/** Whether something answers there: the only proof that a service is up, or gone. */
export function canConnect(target: { port: number } | { path: string }): Promise<boolean> {
  return new Promise((resolve) => {
    const socket = createConnection('port' in target ? { ...target, host: '127.0.0.1' } : target);
    socket.once('connect', () => {
      socket.destroy();
      resolve(true);
    });
    socket.once('error', () => resolve(false));
  });
}
