import { windingConnections } from '../../../shared/schemas/answers.ts';
import type { TrialChange, TrialParts } from '../../../shared/schemas/trials.ts';

/* The fields that each kind of change asks for, and how the answers become a change. */

export type ChangeKind = TrialChange['kind'];

interface Option {
  value: string;
  label: string;
}

export type ChangeField =
  | { key: string; kind: 'number'; label: string; unit?: string; hint?: string; optional?: boolean }
  | { key: string; kind: 'choice'; label: string; options: Option[]; optional?: boolean };

export type ChangeAnswers = Record<string, string | number | undefined>;

const number = (key: string, label: string, unit?: string, hint?: string): ChangeField => ({
  ...{ key, kind: 'number' as const, label },
  ...(unit && { unit }),
  ...(hint && { hint }),
});
const optional = (field: ChangeField): ChangeField => ({ ...field, optional: true });
const choice = (key: string, label: string, options: Option[]): ChangeField => ({
  ...{ key, kind: 'choice' as const, label, options },
});

const toOptions = (elements: readonly { id: string }[]) =>
  elements.map(({ id }) => ({ value: id, label: id }));

const neutralOptions: Option[] = [
  { value: 'solid', label: 'Solidly grounded' },
  { value: 'ungrounded', label: 'Ungrounded' },
  { value: 'impedance', label: 'Through an impedance' },
];
const neutralFields = (key: string, label: string): ChangeField[] => [
  optional(choice(key, label, neutralOptions)),
  optional(number('rOhm', 'Resistance of the neutral', 'Ω')),
  optional(number('xOhm', 'Reactance of the neutral', 'Ω')),
];
const bankFields = [number('rOhm', 'Resistance', 'Ω'), number('xOhm', 'Reactance', 'Ω')];

const fieldsOf: Record<ChangeKind, (parts: TrialParts) => ChangeField[]> = {
  size: () => [number('factor', 'Size times', '', '0.8 is four fifths of what was handed in')],
  'export-limit': () => [number('kw', 'Export limit', 'kW')],
  'power-factor': () => [
    number('powerFactor', 'Power factor'),
    choice('absorbs', 'Direction of vars', [
      { value: 'yes', label: 'Taken from the grid' },
      { value: 'no', label: 'Sent into the grid' },
    ]),
  ],
  'fault-current': () => [number('perUnit', 'Fault current over rated current')],
  transformer: ({ transformers }) => [
    choice('element', 'Transformer', toOptions(transformers)),
    optional(number('kva', 'Rating', 'kVA')),
    optional(number('impedancePercent', 'Impedance', '%')),
    optional(
      choice(
        'connection',
        'Windings',
        windingConnections.map((each) => ({ value: each, label: each })),
      ),
    ),
    ...neutralFields('neutralFrom', 'Utility-side neutral'),
  ],
  'machine-neutral': ({ machines }) => [
    choice('element', 'Machine', toOptions(machines)),
    ...neutralFields('neutral', 'Neutral'),
  ],
  'add-bank': ({ nodes }) => [choice('node', 'Where it stands', toOptions(nodes)), ...bankFields],
  'change-bank': ({ banks }) => [choice('element', 'Ground bank', toOptions(banks)), ...bankFields],
  'remove-bank': ({ banks }) => [choice('element', 'Ground bank', toOptions(banks))],
  device: ({ devices }) => [
    choice('element', 'Device', toOptions(devices)),
    optional(number('interruptingKa', 'Interrupting rating', 'kA')),
    optional(number('testXr', 'X/R of its test')),
    optional(number('phasePickupA', 'Phase pickup', 'A')),
    optional(number('groundPickupA', 'Ground pickup', 'A')),
  ],
};

export function listFields(kind: ChangeKind, parts: TrialParts): ChangeField[] {
  return fieldsOf[kind](parts);
}

/** Kinds that this study has something for. */
export function listKinds(parts: TrialParts): ChangeKind[] {
  const lacks: Partial<Record<ChangeKind, boolean>> = {
    'fault-current': parts.inverters.length === 0,
    transformer: parts.transformers.length === 0,
    'machine-neutral': parts.machines.length === 0,
    'change-bank': parts.banks.length === 0,
    'remove-bank': parts.banks.length === 0,
    device: parts.devices.length === 0,
  };
  return (Object.keys(fieldsOf) as ChangeKind[]).filter((kind) => !lacks[kind]);
}

/** What was typed, as a change; whether it can be is for the server to say, at the field. */
export function toChange(kind: ChangeKind, answers: ChangeAnswers): TrialChange {
  const change: Record<string, unknown> = { kind };
  for (const [key, value] of Object.entries(answers)) {
    if (value !== undefined && value !== '') change[key] = value;
  }
  if (kind === 'power-factor') change.absorbs = answers.absorbs === 'yes';
  const neutralKey =
    kind === 'transformer' ? 'neutralFrom' : kind === 'machine-neutral' ? 'neutral' : undefined;
  if (neutralKey) {
    const { rOhm = 0, xOhm = 0 } = answers;
    delete change.rOhm;
    delete change.xOhm;
    const chosen = answers[neutralKey];
    if (chosen !== undefined)
      change[neutralKey] = chosen === 'impedance' ? { kind: chosen, rOhm, xOhm } : { kind: chosen };
  }
  return change as TrialChange;
}
