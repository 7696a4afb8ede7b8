import { roles } from '../shared/schemas/sessions.ts';
import { getRule } from './access.ts';
import { checkRoutes } from './api.ts';
import { allRoutes } from './routes/table.ts';

/** `npm run routes`: every route with who may take it. */
function makeRow({ method, path, action }: (typeof allRoutes)[number]): string[] {
  const rule = getRule(action);
  const reaches = roles.map((role) => (rule.roles[role] === 'none' ? '·' : rule.roles[role]));
  const where = rule.demoOnly ? 'demo' : '';
  return [method.toUpperCase(), `/api${path}`, action, rule.anonymous ? 'any' : '·', ...reaches, where];
}

checkRoutes(allRoutes);
const heading = ['method', 'path', 'action', 'anonymous', ...roles, ''];
const table = [heading, ...allRoutes.map(makeRow)];
const widths = heading.map((_, column) => Math.max(...table.map((row) => (row[column] ?? '').length)));
for (const row of table) {
  const line = row.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ');
  process.stdout.write(`${line.trimEnd()}\n`);
}
process.stdout.write(
  '\n· none   own: their organisation   any: everything handed in (drafts stay with their writers)\n',
);
