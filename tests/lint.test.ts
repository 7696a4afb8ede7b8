import { ESLint } from 'eslint';
import { describe, expect, it } from 'vitest';

/**
 * Import rules are worth what they catch: each planted file crosses the house's rules and must be refused.
 * The file names exist (the type-aware parser knows them); only their text is replaced for the check.
 */
const planted = [
  {
    what: 'a service that imports the engine',
    filePath: 'server/services/decisions.ts',
    text: "import { runStudy } from '../../workers/engine/run-study.ts';\nexport const planted = runStudy;\n",
    rule: 'boundaries/dependencies',
    teaches: /ask for a run; the worker calls the engine/,
  },
  {
    what: 'a route that imports the database',
    filePath: 'server/routes/decisions.ts',
    text: "import { openDatabase } from '../../db/connection.ts';\nexport const planted = openDatabase;\n",
    rule: 'boundaries/dependencies',
    teaches: /SQL belongs into db.repositories, called from a service/,
  },
  {
    what: 'a client file that imports the server',
    filePath: 'src/api/client.ts',
    text: "import { readConfig } from '../../server/config.ts';\nexport const planted = readConfig;\n",
    rule: 'boundaries/dependencies',
    teaches: /belongs into shared/,
  },
  {
    what: 'a service that knows express',
    filePath: 'server/services/decisions.ts',
    text: "import express from 'express';\nexport const planted = express;\n",
    rule: 'no-restricted-imports',
    teaches: /leave requests and answers to the routes/,
  },
  {
    what: 'an engine file that imports the database',
    filePath: 'workers/engine/faults.ts',
    text: "import { openDatabase } from '../../db/connection.ts';\nexport const planted = openDatabase;\n",
    rule: 'boundaries/dependencies',
    teaches: /engine is pure.*handed in/,
  },
  {
    what: 'a repository that imports a service',
    filePath: 'db/repositories/runs.ts',
    text: "import { recordAudit } from '../../server/services/audit.ts';\nexport const planted = recordAudit;\n",
    rule: 'boundaries/dependencies',
    teaches: /Decide in a service and call a repository from there/,
  },
  {
    what: 'a component that fetches',
    filePath: 'src/components/desk/ClockMark.vue',
    text: "<script setup lang=\"ts\">\nimport { getJson } from '../../api/client.ts';\nvoid getJson('/api/planted');\n</script>\n",
    rule: 'boundaries/dependencies',
    teaches: /Fetching belongs into a composable or the view/,
  },
  {
    what: 'an engine file that reads the clock',
    filePath: 'workers/engine/faults.ts',
    text: 'export const planted = Date.now();\n',
    rule: 'no-restricted-globals',
    teaches: /time|clock/i,
  },
  {
    what: 'an engine file that imports a node module',
    filePath: 'workers/engine/faults.ts',
    text: "import { readFileSync } from 'node:fs';\nexport const planted = readFileSync;\n",
    rule: 'no-restricted-imports',
    teaches: /The engine is pure/,
  },
];

describe('the import rules', () => {
  const eslint = new ESLint();
  it.each(planted)(
    'refuse $what, in words that say where it belongs',
    async ({ filePath, text, rule, teaches }) => {
      const [report] = await eslint.lintText(text, { filePath });
      const told =
        report?.messages.filter(({ ruleId }) => ruleId === rule).map(({ message }) => message) ?? [];
      expect(told.join('\n')).toMatch(teaches);
    },
  );
});
