import type { ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import type { Complex } from '../complex.ts';
import { scale } from '../complex.ts';
import { outputOf } from '../flow/injections.ts';
import { solveTwoNode } from '../flow/two-node.ts';
import { Working } from '../working.ts';
import type { Answered } from './judge.ts';
import { answer, judge } from './judge.ts';
import { limitedTo, numberOf, sourceOf } from './rule-parameters.ts';
import type { Screening } from './screening.ts';
import type { Power, Tied } from './service-generators.ts';
import { findConnected, impedanceOf, notConnectedNote, totalOf } from './service-generators.ts';

const id = 'service';

/** How much higher the voltage is at the customer than on the primary: two steps of two nodes each, both exact. */
export function answerServiceRise(
  screening: Screening,
  transformer: ServiceTransformer,
  tied: readonly Tied[],
): Answered {
  const element = `${transformer.id} (rise)`;
  const limited = limitedTo(screening, id, {
    limit: numberOf(screening, id, 'riseLimitPercent'),
    comparison: '<=',
    unit: '%',
    source: sourceOf(screening, id, 'riseSource'),
  });
  const lack = (note: string) => answer(limited, id, 'needs-data', { element, note });
  const z = impedanceOf(transformer);
  if (!z) return lack('The impedance of this transformer is not known.');
  const connected = findConnected(screening, transformer);
  if (!connected) return lack(notConnectedNote);
  const [worst] = tied
    .filter(({ tie }) => tie.drop)
    .sort((a, b) => b.tie.drop!.r * outputOf(b.generator).kw - a.tie.drop!.r * outputOf(a.generator).kw);
  if (!worst || tied.some(({ tie }) => !tie.drop))
    return lack('The impedance of the secondary and the drop is not known.');
  const volts = transformer.secondaryV;
  const base = volts ** 2;
  const own = totalOf(tied.map(({ generator }) => generator));
  const all = { kw: connected.kw + own.kw, kvar: connected.kvar + own.kvar };
  const drop = worst.tie.drop!;
  // All that shares the drop of the worst unit goes through it.
  const shared = totalOf(
    tied.filter(({ tie }) => tie.drop!.r === drop.r && tie.drop!.x === drop.x).map((t) => t.generator),
  );
  const inPu = (ohms: Complex) => scale(ohms, 1 / base);
  const atSecondary = solveTwoNode(inPu(z), all.kw * 1000, all.kvar * 1000);
  const atCustomer =
    atSecondary === undefined
      ? undefined
      : solveTwoNode(inPu({ re: drop.r, im: drop.x }), shared.kw * 1000, shared.kvar * 1000, atSecondary);
  if (atSecondary === undefined || atCustomer === undefined)
    return answer(limited, id, 'outside', {
      element,
      note: 'The service cannot carry this power at any voltage.',
    });
  const working = new Working();
  const u = working.given('U_n', 'Nominal voltage of the secondary', volts, 'V');
  const first = workStep(working, u, 't', 'transformer', z, all, atSecondary);
  workStep(working, u, 'd', 'secondary and drop', { re: drop.r, im: drop.x }, shared, atCustomer, first);
  return judge(limited, id, {
    element,
    value: (atCustomer - 1) * 100,
    working: working.steps,
    note: `${((atSecondary - 1) * 100).toFixed(2)} % in the transformer, the rest on secondary and drop; ${worst.generator.id} is the furthest.`,
  });
}

type Given = ReturnType<Working['given']>;

/** One two-node step of the rise, from the voltage before it. */
function workStep(
  working: Working,
  u: Given,
  mark: string,
  what: string,
  z: Complex,
  { kw, kvar }: Power,
  to: number,
  previous?: Given,
): Given {
  const r = working.given(`R_${mark}`, `Resistance of ${what}`, z.re, 'ohm');
  const x = working.given(`X_${mark}`, `Reactance of ${what}`, z.im, 'ohm');
  const p = working.given(`P_${mark}`, `Power through ${what}`, kw, 'kW');
  const q = working.given(`Q_${mark}`, `Vars through ${what}`, kvar, 'kvar');
  const base = (kw * 1000 * z.re + kvar * 1000 * z.im) / (u.value as number) ** 2;
  const cross = (kw * 1000 * z.im - kvar * 1000 * z.re) / (u.value as number) ** 2;
  const a = working.compute(
    { symbol: `a_${mark}`, words: 'In phase with the voltage', unit: 'pu' },
    `1000*(R_${mark}*P_${mark} + X_${mark}*Q_${mark})/U_n^2`,
    [r, p, x, q, u],
    base,
  );
  const b = working.compute(
    { symbol: `b_${mark}`, words: 'Across it', unit: 'pu' },
    `1000*(X_${mark}*P_${mark} - R_${mark}*Q_${mark})/U_n^2`,
    [x, p, r, q, u],
    cross,
  );
  const value = (to - 1) * 100;
  const e = previous ? `(1 + ${previous.symbol}/100)` : '1';
  const half = `${e}^2/2 + a_${mark}`;
  return working.compute(
    { symbol: `rise_${mark}`, words: `Rise of the voltage beyond ${what}`, unit: '%' },
    `(sqrt(${half} + sqrt((${half})^2 - a_${mark}^2 - b_${mark}^2)) - 1)*100`,
    previous ? [previous, a, b] : [a, b],
    value,
  );
}
