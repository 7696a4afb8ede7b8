import { parseArgs } from 'node:util';
import { askHolder } from './claim.ts';
import { buildClient, buildServer } from './build.ts';
import { runDesk } from './desk.ts';
import { builtPrograms, watchedPrograms } from './programs.ts';
import { resetDesk } from './reset.ts';
import { runTool } from './tool.ts';

const say = (line: string) => console.log(line);

function readPort(text: string | undefined): number | undefined {
  if (text === undefined) return undefined;
  const port = /^\d+$/.test(text) ? Number(text) : 0;
  if (port < 1 || port > 65535)
    throw new Error(`--port: got "${text}", expected a whole number from 1 to 65535`);
  return port;
}

function readArguments(args: string[]) {
  const { values, positionals } = parseArgs({
    args,
    allowPositionals: true,
    options: {
      data: { type: 'string', default: '.data' },
      port: { type: 'string' },
      yes: { type: 'boolean', default: false },
    },
  });
  return { command: positionals[0], dataDir: values.data, appPort: readPort(values.port), sure: values.yes };
}

async function start(dataDir: string, appPort: number | undefined): Promise<number> {
  // Before the build, which would change the files under the one that runs.
  const holder = await askHolder(dataDir);
  if (holder !== undefined) {
    say(`Feederwright already runs on ${dataDir}: ${holder}`);
    return 1;
  }
  await buildServer('dist/server');
  if (buildClient('dist/client')) say('Built the pages.');
  const programs = builtPrograms('dist/server');
  return runDesk({
    dataDir,
    programs,
    development: false,
    say,
    ...(appPort === undefined ? {} : { appPort }),
  });
}

/** Called by setup.mjs once everything this needs is installed. Gives back the exit code. */
export async function main(args: string[]): Promise<number> {
  try {
    if (args[0] === 'run') return await runTool('.data', args.slice(1));
    const { command, dataDir, appPort, sure } = readArguments(args);
    if (command === 'reset') return await resetDesk(dataDir, sure, say);
    if (command === 'start') return await start(dataDir, appPort);
    const programs = watchedPrograms();
    return await runDesk({
      dataDir,
      programs,
      development: true,
      say,
      ...(appPort === undefined ? {} : { appPort }),
    });
  } catch (error) {
    console.error(error instanceof Error ? error.message : error);
    return 1;
  }
}
