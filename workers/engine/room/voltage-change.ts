import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Model } from '../case.ts';
import type { Complex } from '../complex.ts';
import { magnitude } from '../complex.ts';
import { numberOf } from '../findings/rule-parameters.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import { findFaultPoint } from '../solve-case.ts';
import type { Bound } from './bounds.ts';
import { listDeciding, lowest } from './bounds.ts';

/* How much may trip or ramp at a node, as findings/rapid-voltage-change.ts measures it: a plant at unity power factor. */

const id = 'rapid-voltage-change';

/** The lowest bound over all operating cases; `fed` are those in which a source feeds the node. */
export function boundVoltageChange(
  ruleSet: RuleSet,
  model: Model,
  fed: readonly OperatingCase[],
  node: number,
): Bound | undefined {
  const rule = ruleSet.rules[id];
  if (!rule) return undefined;
  const { id: name, kv } = model.nodes[node]!;
  const screening = { ruleSet };
  // As the finding does: one limit for tripping and ramps, by the voltage of the place, with the consequence of the first.
  const isLow = kv <= numberOf(screening, id, 'lowVoltageUpToKv');
  const [limit] = listDeciding({ ...rule, limits: [rule.limits[0]] });
  if (!limit) return undefined;
  const percent = isLow ? numberOf(screening, id, 'lowVoltageLimitPercent') : limit.limit;
  const share = numberOf(screening, id, 'rampShare');
  const parts = [
    { share: 1, what: 'tripping' },
    { share, what: `a ramp of ${share} of nameplate` },
  ];
  return lowest(
    fed.flatMap(({ solver }) => {
      const point = findFaultPoint(solver.solve('minimum', kv), node);
      if (!point) return [];
      const power = findFirstChange(point.z1, percent / 100) * model.baseMva * 1000;
      return parts.map((part) => ({
        kva: power / part.share,
        limit: { question: id, element: `${name} (${part.what})` },
        isStrict: limit.isStrict,
      }));
    }),
  );
}

/**
 * The active power, per unit, at which two nodes first change by a share c of nominal, or lose their steady voltage.
 * From V⁴ − (1 + 2RP)·V² + |Z|²P² = 0 (flow/two-node.ts with Q = 0), solved for P at V = 1 ± c: a rise, which grid resistance
 * makes first, may turn to a fall as P grows, so that the smallest of all counts. The voltage is lost where
 * 1/4 + RP − X²P² = 0. 12.47 kV, 1.2 + j2.4 Ω, 1.475 %: 2 MW.
 */
export function findFirstChange(z: Complex, change: number): number {
  const size = magnitude(z);
  if (size === 0) return Infinity;
  const rise = powerAt(z, 1 + change, 1);
  const fallen = 1 - change;
  const fall = fallen > 0 ? powerAt(z, fallen, -1) : Infinity;
  // Both voltages multiply to |Z|·P: the steady one is the larger.
  const isSteady = fallen ** 2 >= size * fall;
  const lost = z.im === 0 ? Infinity : (z.re + size) / (2 * z.im ** 2);
  return Math.min(rise, isSteady ? fall : lost);
}

/** The smaller positive P with that V; `side` 1 for a rise, -1 for a fall. */
function powerAt({ re, im }: Complex, volts: number, side: 1 | -1): number {
  const squared = volts ** 2;
  const root = (re * squared) ** 2 - (re ** 2 + im ** 2) * squared * (squared - 1);
  if (root < 0) return Infinity;
  // For a rise the product of both roots, which loses no digits where P is small.
  return side === 1
    ? (squared * (squared - 1)) / (re * squared + Math.sqrt(root))
    : (re * squared + Math.sqrt(root)) / (re ** 2 + im ** 2);
}
