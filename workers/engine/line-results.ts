import type { LineConstants } from '../../shared/schemas/study-result.ts';
import type { Line, Study } from '../../shared/schemas/study.ts';
import { ElementList } from './element-list.ts';
import type { ComputedLine } from './line-impedances.ts';
import { isConstructed, lineCalculator } from './line-impedances.ts';
import { transposedWithinPercent } from './line-transposition.ts';

/** Reports the impedances of every line that names a construction, and warns of those far from transposed. */
export function reportLines(study: Study): { lines?: Record<string, LineConstants>; warnings: string[] } {
  if (!study.feeder.constructions?.length) return { warnings: [] };
  const calculate = lineCalculator(study);
  const entries: [string, LineConstants][] = [];
  // The calculator answers with the same object for the same construction and phases.
  const alike = new Map<ComputedLine, Line[]>();
  for (const line of new ElementList(study, 'lines').elements) {
    if (!isConstructed(line)) continue;
    const computed = calculate(line);
    const { zPerKm, z1, z0 } = computed;
    entries.push([line.id, { zPerKm, z1, z0 }]);
    const others = alike.get(computed);
    if (others) others.push(line);
    else alike.set(computed, [line]);
  }
  if (entries.length === 0) return { warnings: [] };
  const warnings = [...alike].flatMap(([{ percentFromTransposed }, lines]) =>
    percentFromTransposed > transposedWithinPercent ? [describe(lines, percentFromTransposed)] : [],
  );
  return { lines: Object.fromEntries(entries), warnings };
}

/** One sentence for all lines that are built alike, lest a feeder of one construction fill a page. */
function describe(lines: readonly Line[], percent: number): string {
  const { id, construction, phases } = lines[0]!;
  const more = lines.length > 1 ? ` (and ${lines.length - 1} more)` : '';
  return (
    `Line ${id}${more} of construction ${construction}, phases ${phases}, is taken as transposed but is not: ` +
    `its impedances per phase lie up to ${percent.toFixed(1)} % of z1 off their means.`
  );
}
