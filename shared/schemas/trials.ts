import { Type, type Static, type TProperties } from '@sinclair/typebox';
import { Neutral, windingConnections } from './answers.ts';
import type { Finding } from './findings.ts';
import { oneLine } from './text.ts';

/* What a reviewer may change in a run's study to see what would come of it; a trial never takes the run's place. */

/** `what` as in "Enter the rating in kilovolt-amperes". */
const between = (minimum: number, maximum: number, what: string) =>
  Type.Number({
    minimum,
    maximum,
    errorMessage: `Enter ${what}, from ${minimum} to ${maximum.toLocaleString('en')}`,
  });

const element = (what: string) =>
  Type.String({ minLength: 1, maxLength: 200, errorMessage: `Choose ${what}` });

const change = <K extends string, P extends TProperties>(kind: K, properties: P) =>
  Type.Object({ kind: Type.Literal(kind), ...properties }, { additionalProperties: false });

const bank = {
  rOhm: between(0, 10_000, 'the resistance of the bank in ohms'),
  xOhm: between(0.001, 10_000, 'the reactance of the bank in ohms'),
};

export const TrialChange = Type.Union(
  [
    /** Of every generator of the project, with its export limit. */
    change('size', { factor: between(0.01, 10, 'by what the size is multiplied') }),
    /** Of the project as a whole; null lifts it. */
    change('export-limit', {
      kw: Type.Union([between(0, 100_000, 'the export limit in kilowatts'), Type.Null()], {
        errorMessage: 'Enter the export limit in kilowatts, from 0 to 100,000',
      }),
    }),
    /** Negative takes vars from the grid. */
    change('power-factor', {
      absorbs: Type.Boolean({ errorMessage: 'Say whether the project takes vars from the grid' }),
      powerFactor: between(0.5, 1, 'the power factor'),
    }),
    /** Of every inverter of the project, over its rated current. */
    change('fault-current', { perUnit: between(0, 4, 'the fault current over the rated current') }),
    change('transformer', {
      element: element('the transformer'),
      kva: Type.Optional(between(1, 100_000, 'the rating in kilovolt-amperes')),
      impedancePercent: Type.Optional(between(0.5, 30, 'the impedance in percent')),
      zeroImpedancePercent: Type.Optional(between(0.5, 60, 'the zero-sequence impedance in percent')),
      connection: Type.Optional(
        Type.Union(
          windingConnections.map((each) => Type.Literal(each)),
          { errorMessage: 'Choose how the windings are connected' },
        ),
      ),
      neutralFrom: Type.Optional(Neutral),
      neutralTo: Type.Optional(Neutral),
    }),
    change('machine-neutral', { element: element('the machine'), neutral: Neutral }),
    change('add-bank', { node: element('where the bank stands'), ...bank }),
    change('change-bank', { element: element('the bank'), ...bank }),
    change('remove-bank', { element: element('the bank') }),
    change('device', {
      element: element('the device'),
      interruptingKa: Type.Optional(between(0.1, 200, 'the interrupting rating in kiloamperes')),
      testXr: Type.Optional(between(0.1, 100, 'the X/R of its test')),
      ratedKv: Type.Optional(between(0.1, 69, 'its rated voltage in kilovolts')),
      faultClosingKa: Type.Optional(between(0.1, 200, 'the fault-closing rating in kiloamperes')),
      phasePickupA: Type.Optional(between(1, 20_000, 'the phase pickup in amperes')),
      groundPickupA: Type.Optional(between(1, 20_000, 'the ground pickup in amperes')),
      directional: Type.Optional(Type.Boolean({ errorMessage: 'Say whether it is directional' })),
      voltageSupervised: Type.Optional(
        Type.Boolean({ errorMessage: 'Say whether closing is supervised by voltage' }),
      ),
    }),
  ],
  { errorMessage: 'Choose what to change' },
);
export type TrialChange = Static<typeof TrialChange>;

const changes = Type.Array(TrialChange, {
  minItems: 1,
  maxItems: 20,
  errorMessage: 'Change at least one thing, and 20 at most',
});

const runId = Type.String({ minLength: 1, maxLength: 64, errorMessage: 'Name the run' });

export const TrialRequest = Type.Object({ runId, changes }, { additionalProperties: false });
export type TrialRequest = Static<typeof TrialRequest>;

/** The same, to be kept under a name. */
export const VariantRequest = Type.Object(
  { runId, changes, name: oneLine('Enter a name of up to 120 characters', 120) },
  { additionalProperties: false },
);
export type VariantRequest = Static<typeof VariantRequest>;

/** What a trial may name: the project's own equipment, the ground banks, and every device. */
export interface TrialParts {
  project: { kva: number; exportKw: number | null };
  transformers: { id: string; kva: number; connection: string; impedancePercent: number }[];
  machines: { id: string; kind: string; kva: number }[];
  inverters: { id: string; kva: number; faultCurrentPu: number }[];
  banks: { id: string; node: string; rOhm: number; xOhm: number }[];
  /** Where a bank may be added: the point of interconnection and the project's own nodes. */
  nodes: { id: string; kv: number }[];
  devices: {
    id: string;
    kind: string;
    interruptingKa: number | null;
    phasePickupA: number | null;
    groundPickupA: number | null;
  }[];
}

/** A finding of the run beside that of the trial; null where one of them has none. */
export interface FindingPair {
  run: Finding | null;
  trial: Finding | null;
}

export interface TrialView {
  runId: string;
  changes: TrialChange[];
  pairs: FindingPair[];
}

/** One that was kept. */
export interface VariantView extends TrialView {
  publicId: string;
  name: string;
  keptBy: string;
  keptAt: string;
}
