import type { Inverter, Machine } from '../../../shared/schemas/study.ts';
import type { ServiceTie, ServiceTransformer } from '../../../shared/schemas/study-utility.ts';
import type { Complex } from '../complex.ts';
import { polar } from '../complex.ts';
import { outputOf } from '../flow/injections.ts';
import type { Screening } from './screening.ts';

/* What hangs from a service transformer, and the transformer itself. */

export type Generator = Machine | Inverter;
export type Tied = { generator: Generator; tie: ServiceTie };

export type Power = { kw: number; kvar: number };

export function totalOf(generators: readonly Generator[]): Power {
  return generators
    .map(outputOf)
    .reduce((sum, { kw, kvar }) => ({ kw: sum.kw + kw, kvar: sum.kvar + kvar }), {
      kw: 0,
      kvar: 0,
    });
}

/** What is on the transformer already: what its record says and what the model ties to it besides; unknown on a shared one without either. */
export function findConnected(
  { study }: Screening,
  { id: name, generationKw, shared }: ServiceTransformer,
): Power | undefined {
  const { machines = [], inverters = [] } = study.feeder;
  const there = [...machines, ...inverters].filter(({ service }) => service?.transformer === name);
  if (there.length === 0 && generationKw === undefined && shared !== false) return undefined;
  const { kw, kvar } = totalOf(there);
  return { kw: kw + (generationKw ?? 0), kvar };
}

export const notConnectedNote = 'What generation is on this transformer already is not known.';

/** Series impedance of the transformer in ohms at its secondary voltage. */
export function impedanceOf({
  impedancePercent,
  xr,
  kva,
  secondaryV,
}: ServiceTransformer): Complex | undefined {
  if (impedancePercent === undefined || xr === undefined) return undefined;
  const size = ((impedancePercent / 100) * secondaryV ** 2) / (kva * 1000);
  return polar(size, (Math.atan(xr) * 180) / Math.PI);
}
