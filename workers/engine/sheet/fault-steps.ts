import type { FaultKind } from '../../../shared/schemas/study-result.ts';
import type { Quantity, WorkingStep } from '../../../shared/schemas/working.ts';
import { allPhases } from '../case.ts';
import type { Complex } from '../complex.ts';
import { a, a2, add, divide, magnitude, multiply, scale, subtract, sum } from '../complex.ts';
import type { Fault, FaultPoint } from '../faults.ts';
import { largestPhase, listBoltedFaults } from '../faults.ts';
import { sequencesOf } from '../open-circuit.ts';
import { Working } from '../working.ts';

/*
 * A fault at the point of interconnection, step by step: how it joins the three sequence networks, the currents per unit, the
 * largest phase current in amperes. The formulas are those of fault-currents.ts and faults.ts.
 */

type Names = { z1: Quantity; z2: Quantity; z0: Quantity; v1: Quantity };

const per = (symbol: string, words: string) => ({ symbol, words, unit: 'pu' });

/** Gives the steps of the worst bolted fault of a kind; none where the place lacks the phases. */
export function listFaultSteps(
  point: FaultPoint,
  kind: FaultKind,
  baseAmps: Quantity,
  amps: number,
): readonly WorkingStep[] {
  const fault = listBoltedFaults(point)
    .filter((each) => each.kind === kind)
    .reduce<Fault | undefined>((p, q) => (p && largestPhase(p) >= largestPhase(q) ? p : q), undefined);
  if (!fault) return [];
  const working = new Working();
  const isPlain = point.balanced && point.phases === allPhases;
  if ((kind === 'lineGround' || kind === 'lineLineGround') && !point.z0) {
    if (kind === 'lineGround') return [];
    working.given(
      'I0',
      'zero-sequence current: that network is open, so the fault is one between lines',
      0,
      'pu',
    );
  }
  const largest = isPlain
    ? plainSteps(working, point, kind, nameAll(point))
    : phaseSteps(working, point, fault, nameAll(point));
  if (!largest) return [];
  working.compute(
    { symbol: 'I', words: 'largest phase current', unit: 'A' },
    `${largest.symbol}*${baseAmps.symbol}`,
    [largest, baseAmps],
    amps,
  );
  return working.steps;
}

function nameAll({ z1, z2, z0, voltage }: FaultPoint): Names {
  const open: Complex = { re: 0, im: 0 };
  return {
    z1: { symbol: 'Z1', words: 'positive-sequence impedance', value: z1, unit: 'pu' },
    z2: { symbol: 'Z2', words: 'negative-sequence impedance', value: z2, unit: 'pu' },
    z0: { symbol: 'Z0', words: 'zero-sequence impedance', value: z0 ?? open, unit: 'pu' },
    v1: {
      symbol: 'V',
      words: 'voltage before the fault, inverter currents in',
      value: sequencesOf(voltage).i1,
      unit: 'pu',
    },
  };
}

/** With V1 alone before the fault, the networks join in the textbook ways. */
function plainSteps(working: Working, point: FaultPoint, kind: FaultKind, names: Names): Quantity {
  const { z1, z2, z0, v1 } = names;
  const v = v1.value as Complex;
  const ofSize = (current: Quantity, symbol: string, words: string): Quantity =>
    working.compute(
      per(symbol, words),
      `abs(${current.symbol})`,
      [current],
      magnitude(current.value as Complex),
    );
  if (kind === 'threePhase') {
    const i1 = working.compute(
      per('I1', 'the positive sequence alone'),
      'V/Z1',
      [v1, z1],
      divide(v, point.z1),
    );
    return ofSize(i1, 'Ip', 'in each phase');
  }
  if (kind === 'lineGround') {
    const loop = sum(point.z0!, point.z1, point.z2);
    const i0 = working.compute(
      per('I0', 'the three networks in series: I1 = I2 = I0'),
      'V/(Z0 + Z1 + Z2)',
      [v1, z0, z1, z2],
      divide(v, loop),
    );
    return working.compute(
      per('Ip', 'in the faulted phase'),
      '3*abs(I0)',
      [i0],
      3 * magnitude(divide(v, loop)),
    );
  }
  if (kind === 'lineLine' || !point.z0) {
    const i1 = working.compute(
      per('I1', 'positive and negative networks in parallel: I2 = -I1'),
      'V/(Z1 + Z2)',
      [v1, z1, z2],
      divide(v, add(point.z1, point.z2)),
    );
    const size = Math.sqrt(3) * magnitude(i1.value as Complex);
    return working.compute(per('Ip', 'in either of the two phases'), 'sqrt(3)*abs(I1)', [i1], size);
  }
  return twoLinesToGround(working, point, names);
}

function twoLinesToGround(working: Working, point: FaultPoint, { z1, z2, z0, v1 }: Names): Quantity {
  const zero = point.z0!;
  const parallel = divide(multiply(point.z2, zero), add(point.z2, zero));
  const zp = working.compute(
    per('Zp', 'negative and zero networks in parallel'),
    'Z2*Z0/(Z2 + Z0)',
    [z2, z0],
    parallel,
  );
  const positive = divide(v1.value as Complex, add(point.z1, parallel));
  const i1 = working.compute(per('I1', 'positive sequence'), 'V/(Z1 + Zp)', [v1, z1, zp], positive);
  const share = (z: Complex) => scale(divide(multiply(positive, z), add(point.z2, zero)), -1);
  const [negative, earth] = [share(zero), share(point.z2)];
  const i2 = working.compute(per('I2', 'negative sequence'), '-I1*Z0/(Z2 + Z0)', [i1, z0, z2], negative);
  const i0 = working.compute(per('I0', 'zero sequence'), '-I1*Z2/(Z2 + Z0)', [i1, z2, z0], earth);
  const turn: Quantity = { symbol: 'a', words: 'a turn by 120 degrees', value: a, unit: '' };
  const currents = [i0, i1, i2, turn];
  const ib = sum(earth, multiply(a2, positive), multiply(a, negative));
  const ic = sum(earth, multiply(a, positive), multiply(a2, negative));
  const inB = working.compute(per('Ib', 'in one phase'), 'I0 + a^2*I1 + a*I2', currents, ib);
  const inC = working.compute(per('Ic', 'in the other'), 'I0 + a*I1 + a^2*I2', currents, ic);
  return working.compute(
    per('Ip', 'the larger of the two'),
    'max(abs(Ib), abs(Ic))',
    [inB, inC],
    Math.max(magnitude(ib), magnitude(ic)),
  );
}

/** With unlike voltages before the fault, or on a lateral: in phases, from the same three impedances. */
function phaseSteps(working: Working, point: FaultPoint, fault: Fault, names: Names): Quantity | undefined {
  if (fault.kind === 'threePhase') return unlikeThreePhase(working, point, fault, names);
  const p = fault.currents.findIndex((current, phase) => isFirst(fault, phase) && magnitude(current) > 0);
  if (p === -1) return undefined;
  const q = (p + 1) % 3;
  const voltage = (phase: number): Quantity => ({
    symbol: `V${'abc'[phase]!}`,
    words: 'voltage of the phase before the fault, inverter currents in',
    value: point.voltage[phase]!,
    unit: 'pu',
  });
  const [vp, vq] = [voltage(p), voltage(q)];
  const self: Quantity = {
    symbol: 'Zs',
    words: 'self impedance of the lateral',
    value: point.self,
    unit: 'pu',
  };
  const mutual: Quantity = {
    symbol: 'Zm',
    words: 'mutual impedance of the lateral',
    value: point.mutual,
    unit: 'pu',
  };
  const { z1, z2, z0 } = names;
  const current = (value: Complex, formula: string, inputs: Quantity[], words: string) =>
    working.compute(per('Ip', words), `abs(${formula})`, inputs, magnitude(value));
  if (fault.kind === 'lineLine' || (fault.kind === 'lineLineGround' && !point.z0)) {
    const formula = `(${vp.symbol} - ${vq.symbol})/(Z1 + Z2 + 2*(Zs - Zm))`;
    return current(
      fault.currents[p]!,
      formula,
      [vp, vq, z1, z2, self, mutual],
      'in either of the two phases',
    );
  }
  const zpp = add(scale(sum(point.z0!, point.z1, point.z2), 1 / 3), point.self);
  const own = working.compute(
    per('Zpp', 'impedance of a phase to ground'),
    '(Z0 + Z1 + Z2)/3 + Zs',
    [z0, z1, z2, self],
    zpp,
  );
  if (fault.kind === 'lineGround') {
    return current(fault.currents[p]!, `${vp.symbol}/Zpp`, [vp, own], 'in the faulted phase');
  }
  const turn: Quantity = { symbol: 'a', words: 'a turn by 120 degrees', value: a, unit: '' };
  const coupling = (t1: Complex, t2: Complex) =>
    add(scale(sum(point.z0!, multiply(t1, point.z1), multiply(t2, point.z2)), 1 / 3), point.mutual);
  const between = [z0, z1, z2, turn, mutual];
  const zpq = coupling(a, a2);
  const zqp = coupling(a2, a);
  const pq = working.compute(
    per('Zpq', 'from the second phase'),
    '(Z0 + a*Z1 + a^2*Z2)/3 + Zm',
    between,
    zpq,
  );
  const qp = working.compute(per('Zqp', 'from the first phase'), '(Z0 + a^2*Z1 + a*Z2)/3 + Zm', between, zqp);
  const determinant = subtract(multiply(zpp, zpp), multiply(zpq, zqp));
  const d = working.compute(per('D', 'determinant'), 'Zpp^2 - Zpq*Zqp', [own, pq, qp], determinant);
  const size = Math.max(magnitude(fault.currents[p]!), magnitude(fault.currents[q]!));
  return working.compute(
    per('Ip', 'the larger of the two'),
    `max(abs((Zpp*${vp.symbol} - Zpq*${vq.symbol})/D), abs((Zpp*${vq.symbol} - Zqp*${vp.symbol})/D))`,
    [own, pq, qp, vp, vq, d],
    size,
  );
}

/** Of two faulted phases the one that the other comes after; of one, itself. */
function isFirst({ currents }: Fault, phase: number): boolean {
  const isIn = (each: number) => magnitude(currents[each % 3]!) > 0;
  return isIn(phase) && (isIn(phase + 1) || !isIn(phase + 2));
}

function unlikeThreePhase(
  working: Working,
  point: FaultPoint,
  fault: Fault,
  { z1, z2, z0 }: Names,
): Quantity {
  const { i1: v1, i2: v2, i0: v0 } = sequencesOf(point.voltage);
  const volts = (symbol: string, words: string, value: Complex): Quantity => ({
    symbol,
    words: `${words}-sequence voltage before the fault`,
    value,
    unit: 'pu',
  });
  const inputs = [volts('V1', 'positive', v1), z1, volts('V2', 'negative', v2), z2];
  const turn: Quantity = { symbol: 'a', words: 'a turn by 120 degrees', value: a, unit: '' };
  const i1 = working.compute(
    per('I1', 'positive sequence'),
    'V1/Z1',
    inputs.slice(0, 2),
    divide(v1, point.z1),
  );
  const i2 = working.compute(per('I2', 'negative sequence'), 'V2/Z2', inputs.slice(2), divide(v2, point.z2));
  const currents = [i1, i2];
  let earth = '';
  if (point.z0) {
    const zeroInputs = [volts('V0', 'zero', v0), z0];
    currents.push(working.compute(per('I0', 'zero sequence'), 'V0/Z0', zeroInputs, divide(v0, point.z0)));
    earth = 'I0 + ';
  }
  return working.compute(
    per('Ip', 'the largest of the three phases'),
    `max(abs(${earth}I1 + I2), abs(${earth}a^2*I1 + a*I2), abs(${earth}a*I1 + a^2*I2))`,
    [...currents, turn],
    largestPhase(fault),
  );
}
