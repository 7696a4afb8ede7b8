import { writeFileSync } from 'node:fs';
import type { SerializedError } from 'vitest';
import type { Reporter, TestModule } from 'vitest/node';
import { plainLine, type Counts } from './counts.ts';

function countModule(module: TestModule): Counts {
  const states = [...module.children.allTests()].map((test) => test.result().state);
  const count = (...wanted: string[]) => states.filter((state) => wanted.includes(state)).length;
  // A file that does not load, or a beforeAll that throws, fails no test of its own: it must not pass for nothing.
  const suites = [...module.children.allSuites()].filter((suite) => suite.errors().length > 0).length;
  const broken = suites + (module.errors().length > 0 ? 1 : 0);
  return {
    passed: count('passed'),
    // Pending is one that was never run: the run was broken off.
    failed: count('failed', 'pending') + broken,
    skipped: count('skipped'),
  };
}

/** Counts for tests/support/run-tests.ts, which adds the stages up; prints the plain line itself elsewhere. */
// eslint-disable-next-line no-restricted-exports -- vitest takes a reporter by its default export
export default class PlainLineReporter implements Reporter {
  onTestRunEnd(modules: readonly TestModule[], unhandledErrors: readonly SerializedError[]): void {
    const total: Counts = { passed: 0, failed: unhandledErrors.length, skipped: 0 };
    for (const module of modules) {
      const counts = countModule(module);
      total.passed += counts.passed;
      total.failed += counts.failed;
      total.skipped += counts.skipped;
    }
    const file = process.env.FEEDERWRIGHT_COUNTS_FILE;
    if (file === undefined) process.once('exit', () => console.log(plainLine(total)));
    else writeFileSync(file, JSON.stringify(total));
  }
}
