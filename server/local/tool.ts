import { existsSync } from 'node:fs';
import { inheritEnvironment, writeEnvironment } from '../config.ts';
import { askHolder } from './claim.ts';
import { makeLocalConfig, readPorts } from './local-config.ts';
import { keepSecrets } from './private-files.ts';
import { startProcess } from './processes.ts';
import { sourceProgram } from './programs.ts';

/** Runs a program of the command line with the settings of the desk that runs. Gives back its exit code. */
export async function runTool(dataDir: string, args: string[]): Promise<number> {
  const [name = '', ...more] = args;
  const source = `workers/${name}.ts`;
  if (!/^[a-z-]+$/.test(name) || !existsSync(source)) {
    throw new Error(`run: got "${name}", expected the name of a program in workers/, such as verify-audit`);
  }
  if ((await askHolder(dataDir)) === undefined) {
    throw new Error(`Nothing runs on ${dataDir}: start the desk with \`npm start\` first.`);
  }
  const config = makeLocalConfig({
    dataDir,
    ports: readPorts(dataDir),
    secrets: keepSecrets(dataDir),
    development: false,
  });
  const program = sourceProgram(source);
  const running = startProcess({
    name: source,
    command: program.command,
    args: [...program.args, ...more],
    env: inheritEnvironment(writeEnvironment(config)),
  });
  for (const signal of ['SIGINT', 'SIGTERM'] as const) process.once(signal, () => void running.stop());
  return (await running.exited).code ?? 1;
}
