import type { WorkingStep } from '../../../shared/schemas/working.ts';
import { a, add, magnitude, multiply } from '../complex.ts';
import { largestPhase } from '../faults.ts';
import { nodeAt } from '../model-parts.ts';
import { phasesOf, sequencesOf } from '../open-circuit.ts';
import { baseAmps } from '../per-unit.ts';
import { Working } from '../working.ts';
import { pickupOf } from './reach.ts';
import { withoutResidue } from './residue.ts';
import type { Screening } from './screening.ts';
import type { Reverse } from './sympathetic-trip.ts';

/* The steps from a fault next door to the current that a breaker sends back. Per unit until the last. */

/** Writes down what a breaker carries for a fault behind it, over its pickup. */
export function workReverse({ model }: Screening, reverse: Reverse): readonly WorkingStep[] {
  const { zone, kind, node, fault, current, amps, multiple } = reverse;
  const working = new Working();
  const place = nodeAt(model, node).id;
  const breaker = zone.device.id;
  const base = baseAmps(model.baseMva, nodeAt(model, zone.node).kv);
  const { i1, i2, i0 } = sequencesOf(fault.currents);
  const scale = largestPhase(fault);
  const sequences = [
    { number: 1, name: 'positive', into: i1 },
    { number: 2, name: 'negative', into: i2 },
    { number: 0, name: 'zero', into: i0 },
  ].map((sequence, index) => ({
    ...sequence,
    into: withoutResidue(sequence.into, scale),
    share: withoutResidue(current.shares[index]!),
    prefault: withoutResidue(current.prefault[index]!, scale),
    value: withoutResidue(
      add(multiply(current.shares[index]!, sequence.into), current.prefault[index]!),
      scale,
    ),
  }));
  const asked = kind === 'ground' ? sequences.slice(2) : sequences;
  const found = asked.map(({ number, name, into, share, prefault, value }) => {
    const i = working.given(`I${number}`, `${name} sequence into the fault at ${place}`, into, 'pu');
    const d = working.given(`D${number}`, `share of it that ${breaker} carries, (Zkf - Zmf)/Zkm`, share, '');
    const p = working.given(`P${number}`, `${name} sequence in ${breaker} before the fault`, prefault, 'pu');
    const symbol = { symbol: `J${number}`, words: `${name} sequence in ${breaker}`, unit: 'pu' };
    return working.compute(symbol, `D${number}*I${number} + P${number}`, [d, i, p], value);
  });
  const ibase = working.given('I_base', `base current at ${breaker}`, base, 'A');
  const device = (words: string) => ({ symbol: 'I_device', words, unit: 'A' });
  const inDevice =
    kind === 'ground'
      ? working.compute(device(`3I0 in ${breaker}`), 'abs(3*J0)*I_base', [found[0]!, ibase], amps)
      : working.compute(
          device(`largest phase current in ${breaker}`),
          'max(abs(J0 + J1 + J2), abs(J0 + a^2*J1 + a*J2), abs(J0 + a*J1 + a^2*J2))*I_base',
          [...found, working.given('a', 'turn by 120 degrees', a, ''), ibase],
          withoutResidue(Math.max(...phasesOf(...valuesOf(sequences)).map(magnitude)), scale) * base,
        );
  const pickup = working.given(
    'I_pickup',
    `${kind} pickup of ${breaker}, from the model`,
    pickupOf(zone.device, kind)!,
    'A',
  );
  working.compute(
    { symbol: 'M', words: 'multiple of pickup', unit: '' },
    'I_device/I_pickup',
    [inDevice, pickup],
    multiple,
  );
  return working.steps;
}

function valuesOf(sequences: readonly { value: { re: number; im: number } }[]) {
  return [sequences[0]!.value, sequences[1]!.value, sequences[2]!.value] as const;
}
