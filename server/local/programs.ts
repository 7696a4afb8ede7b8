import { join } from 'node:path';

export interface Program {
  command: string;
  args: string[];
}

/** What the supervisor starts; tests put small programs of their own in its place. */
export interface Programs {
  /** Migrates, writes reference values, seeds the demo once, and ends. */
  prepare: Program;
  worker: Program;
  server: Program;
  mailbox: Program;
}

const node = process.execPath;

export function builtPrograms(outDir: string): Programs {
  const built = (name: string): Program => ({
    command: node,
    args: ['--enable-source-maps', join(outDir, `${name}.js`)],
  });
  return {
    prepare: built('workers/prepare'),
    worker: built('workers/start'),
    server: built('server/start'),
    mailbox: built('server/local/mailbox'),
  };
}

/** From the sources, through tsx. */
export function sourceProgram(path: string): Program {
  return { command: node, args: ['--import', 'tsx', path] };
}

export function sourcePrograms(): Programs {
  return {
    prepare: sourceProgram('workers/prepare.ts'),
    worker: sourceProgram('workers/start.ts'),
    server: sourceProgram('server/start.ts'),
    mailbox: sourceProgram('server/local/mailbox.ts'),
  };
}

/** Server and worker start again at each change of their sources. */
export function watchedPrograms(): Programs {
  const watched = (path: string): Program => ({
    command: node,
    args: ['node_modules/tsx/dist/cli.mjs', 'watch', '--clear-screen=false', path],
  });
  return { ...sourcePrograms(), worker: watched('workers/start.ts'), server: watched('server/start.ts') };
}
