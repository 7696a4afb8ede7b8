import { buildClient, buildServer } from '../../server/local/build.ts';
import { inheritEnvironment } from '../../server/config.ts';
import { addCounts, plainLine, type Counts } from './counts.ts';
import { startTestServices, writeServices } from './services.ts';
import { Stages } from './stages.ts';

/** Apart from dist/, so that a desk that runs from there is left alone. */
const buildDir = '.cache/test-build';

async function build(): Promise<Counts> {
  try {
    await buildServer(`${buildDir}/server`);
    buildClient(`${buildDir}/client`);
    console.log('✓ build');
    return { passed: 1, failed: 0, skipped: 0 };
  } catch (error) {
    console.log(`✗ build: ${error instanceof Error ? error.message : String(error)}`);
    return { passed: 0, failed: 1, skipped: 0 };
  }
}

async function runStages(stages: Stages): Promise<Counts> {
  const types = stages.check('types', ['node_modules/vue-tsc/bin/vue-tsc.js', '-b']);
  const lint = stages.check('lint', [
    'node_modules/eslint/bin/eslint.js',
    '.',
    '--cache',
    '--cache-location',
    '.cache/eslint',
    '--max-warnings',
    '0',
  ]);
  const checks = await Promise.all([types, lint]);
  const format = await stages.check('format', ['node_modules/prettier/bin/prettier.cjs', '--check', '.']);
  const built = await build();
  const engine = await stages.project('engine');
  // Each of the two waits for processes of its own half of the time.
  const [code, browser] = await Promise.all([stages.project('code'), stages.projectBeside('browser')]);
  return addCounts([...checks, format, built, engine, code, browser]);
}

/** Called by setup.mjs once everything this needs is installed. Gives back the exit code. */
export async function main(): Promise<number> {
  const startedAt = Date.now();
  const { services, stop } = await startTestServices();
  const env = inheritEnvironment({ ...writeServices(services), FEEDERWRIGHT_TEST_BUILD: buildDir });
  const stages = new Stages(services.directory, env);
  let interrupted = false;
  const interrupt = () => {
    interrupted = true;
    void stages.stop();
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, interrupt);
  let counts: Counts;
  try {
    counts = await runStages(stages);
  } finally {
    await stop();
  }
  if (interrupted) {
    console.log('Broken off: what is below is not the whole.');
    counts = addCounts([counts, { passed: 0, failed: 1, skipped: 0 }]);
  }
  console.log(`\nTook ${Math.round((Date.now() - startedAt) / 1000)} s`);
  console.log(plainLine(counts));
  return counts.failed === 0 ? 0 : 1;
}
