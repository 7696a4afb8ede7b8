import type { Quantity, QuantityValue, WorkingStep } from '../../../shared/schemas/working.ts';
import type { Complex } from '../complex.ts';
import { a, add, divide, magnitude, multiply, scale, subtract, sum } from '../complex.ts';
import { largestPhase } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import { phasesOf, sequencesOf } from '../open-circuit.ts';
import { baseAmps, baseOhms } from '../per-unit.ts';
import { Working } from '../working.ts';
import { pickupOf } from './reach.ts';
import type { Reach, Sight } from './reach.ts';
import { withoutResidue } from './residue.ts';
import type { Screening } from './screening.ts';

/* The steps from the Thevenin impedances at the end of a zone to the current in its device. All per unit until the last. */

const pairs = [
  ['A', 'B'],
  ['B', 'C'],
  ['C', 'A'],
] as const;

/** Writes down a multiple of pickup. */
export function workMultiple(
  screening: Screening,
  reach: Reach,
  kind: 'phase' | 'ground',
): readonly WorkingStep[] {
  const working = new Working();
  const pickupA = pickupOf(reach.zone.device, kind)!;
  const amps = workAmps(working, screening, reach, reach.after, kind, '');
  const pickup = working.given(
    'I_pickup',
    `${kind} pickup of ${reach.zone.device.id}, from the model`,
    pickupA,
    'A',
  );
  working.compute(
    { symbol: 'M', words: 'multiple of pickup', unit: '' },
    `${amps.symbol}/I_pickup`,
    [amps, pickup],
    reach.after.amps / pickupA,
  );
  return working.steps;
}

/** Writes down by how much the project lowers the residual current. */
export function workFall(screening: Screening, reach: Reach): readonly WorkingStep[] {
  const working = new Working();
  const before = workAmps(working, screening, reach, reach.before!, 'ground', '_before');
  const after = workAmps(working, screening, reach, reach.after, 'ground', '_after');
  working.compute(
    { symbol: 'fall', words: 'fall of 3I0 in the device by the project', unit: '%' },
    `(1 - ${after.symbol}/${before.symbol})*100`,
    [after, before],
    (1 - reach.after.amps / reach.before!.amps) * 100,
  );
  return working.steps;
}

function workAmps(
  working: Working,
  { model }: Screening,
  { zone, node }: Reach,
  sight: Sight,
  kind: 'phase' | 'ground',
  suffix: string,
): Quantity {
  const place = nodeAt(model, node);
  const name = (symbol: string) => `${symbol}${suffix}`;
  const given = (symbol: string, words: string, value: QuantityValue, unit = 'pu') =>
    working.given(name(symbol), words, value, unit);
  const ibase = given(
    'I_base',
    `base current at ${zone.device.id}`,
    baseAmps(model.baseMva, nodeAt(model, zone.node).kv),
    'A',
  );
  const { point } = sight;
  const z1 = given('Z1', `positive-sequence Thevenin impedance at ${place.id}`, point.z1);
  const z2 = given('Z2', `negative-sequence Thevenin impedance at ${place.id}`, point.z2);
  const compute = (
    symbol: string,
    words: string,
    formula: string,
    inputs: Quantity[],
    value: QuantityValue,
    unit = 'pu',
  ) =>
    working.compute(
      { symbol: name(symbol), words, unit },
      withSuffix(formula, suffix, inputs),
      inputs,
      value,
    );
  if (kind === 'ground') return workGround();
  return workPhase();

  function workGround(): Quantity {
    const { fault, current, faultOhm } = sight;
    const p = fault.currents.findIndex(({ re, im }) => re !== 0 || im !== 0);
    const voltage = point.voltage[Math.max(p, 0)]!;
    const z0Value = point.z0 ?? { re: 0, im: 0 };
    const z0 = given('Z0', `zero-sequence Thevenin impedance at ${place.id}`, z0Value);
    const v = given('V', `voltage of the faulted phase before the fault`, voltage);
    const zp = given(
      'Zp',
      'self impedance of the path on the lateral; 0 on the three-phase part',
      point.self,
    );
    const rfValue = faultOhm / baseOhms(model.baseMva, place.kv);
    const rf = given('Rf', `resistance of the fault, ${faultOhm} ohm`, rfValue);
    const loopValue = add(add(scale(sum(z0Value, point.z1, point.z2), 1 / 3), point.self), {
      re: rfValue,
      im: 0,
    });
    const loop = compute(
      'Z',
      'impedance of the loop',
      '(Z0 + Z1 + Z2)/3 + Zp + Rf',
      [z0, z1, z2, zp, rf],
      loopValue,
    );
    const i = compute('I', 'current into the fault', 'V/Z', [v, loop], divide(voltage, loopValue));
    const d0 = given(
      'D0',
      `share of the zero sequence that ${zone.device.id} carries, (Zkf - Zmf)/Zkm`,
      withoutResidue(current.shares[2]),
      '',
    );
    const p0Value = withoutResidue(current.prefault[2], largestPhase(fault));
    const p0 = given('P0', 'zero-sequence current there before the fault', p0Value);
    return compute(
      'I_device',
      `3I0 in ${zone.device.id}`,
      'abs(D0*I + 3*P0)*I_base',
      [d0, i, p0, ibase],
      sight.amps,
      'A',
    );
  }

  function workPhase(): Quantity {
    const { fault, current } = sight;
    const faultSize = largestPhase(fault);
    const pairIndex = pairs.findIndex((_, q) => {
      const out = fault.currents[q]!;
      const back = fault.currents[(q + 1) % 3]!;
      return magnitude(out) > 0 && magnitude(add(out, back)) <= 1e-12 * magnitude(out);
    });
    const q = Math.max(pairIndex, 0);
    const [first, second] = pairs[q]!;
    const voltage = subtract(point.voltage[q]!, point.voltage[(q + 1) % 3]!);
    const path = subtract(point.self, point.mutual);
    const v = given('V', `voltage between ${first} and ${second} before the fault`, voltage);
    const zp = given(
      'Zp',
      'self less mutual impedance of the path on the lateral; 0 on the three-phase part',
      path,
    );
    const loopValue = add(add(point.z1, point.z2), scale(path, 2));
    const loop = compute('Z', 'impedance of the loop', 'Z1 + Z2 + 2*Zp', [z1, z2, zp], loopValue);
    const iValue = divide(voltage, loopValue);
    const i = compute('I', 'current into the fault', 'V/Z', [v, loop], iValue);
    const turn = given('a', 'turn by 120 degrees', a, '');
    const ofFault = sequencesOf(fault.currents);
    const i1 = compute('I1', 'its positive sequence', formulas1[q]!, [turn, i], ofFault.i1);
    const i2 = compute('I2', 'its negative sequence', formulas2[q]!, [turn, i], ofFault.i2);
    const [d1, d2] = [1, 2].map((s) =>
      given(
        `D${s}`,
        `share of it that ${zone.device.id} carries, (Zkf - Zmf)/Zkm`,
        withoutResidue(current.shares[s - 1]!),
        '',
      ),
    );
    const [p1, p2, p0] = ([1, 2, 0] as const).map((s, index) =>
      given(
        `P${s}`,
        `current there before the fault, sequence ${s}`,
        withoutResidue(current.prefault[index]!, faultSize),
      ),
    );
    const sequenceIn = (s: 0 | 1, into: Complex) =>
      withoutResidue(add(multiply(current.shares[s], into), current.prefault[s]), faultSize);
    const j1Value = sequenceIn(0, ofFault.i1);
    const j2Value = sequenceIn(1, ofFault.i2);
    const j1 = compute('J1', `positive sequence in ${zone.device.id}`, 'D1*I1 + P1', [d1!, i1, p1!], j1Value);
    const j2 = compute('J2', `negative sequence in ${zone.device.id}`, 'D2*I2 + P2', [d2!, i2, p2!], j2Value);
    const phases = phasesOf(j1Value, j2Value, current.prefault[2]);
    const largest = withoutResidue(Math.max(...phases.map(magnitude)), faultSize) * ibaseValue();
    return compute(
      'I_device',
      `largest phase current in ${zone.device.id}`,
      'max(abs(P0 + J1 + J2), abs(P0 + a^2*J1 + a*J2), abs(P0 + a*J1 + a^2*J2))*I_base',
      [p0!, j1, j2, turn, ibase],
      largest,
      'A',
    );
  }

  function ibaseValue(): number {
    return ibase.value as number;
  }
}

/* Of I in one phase and back in the next: (Ia + a·Ib + a²·Ic)/3 and (Ia + a²·Ib + a·Ic)/3. */
const formulas1 = ['(1 - a)/3*I', '(a - a^2)/3*I', '(a^2 - 1)/3*I'];
const formulas2 = ['(1 - a^2)/3*I', '(a^2 - a)/3*I', '(a - 1)/3*I'];

/** Formulas name their inputs; where a working has two of each, both carry a suffix. */
function withSuffix(formula: string, suffix: string, inputs: readonly Quantity[]): string {
  if (suffix === '') return formula;
  const names = new Set(inputs.map(({ symbol }) => symbol));
  return formula.replace(/[A-Za-z][A-Za-z0-9_]*/g, (word) =>
    names.has(`${word}${suffix}`) ? `${word}${suffix}` : word,
  );
}
