import { formatNumber, formatQuantity } from './format.ts';
import type { Neutral } from './schemas/answers.ts';
import type { TrialChange } from './schemas/trials.ts';

/** What each kind of change is called where one is chosen. */
export const changeKindWords: Record<TrialChange['kind'], string> = {
  size: 'Size of the project',
  'export-limit': 'Export limit',
  'power-factor': 'Power factor',
  'fault-current': 'Fault current of the inverters',
  transformer: 'Transformer of the project',
  'machine-neutral': 'Neutral of a machine',
  'add-bank': 'Add a ground bank',
  'change-bank': 'Change a ground bank',
  'remove-bank': 'Remove a ground bank',
  device: 'Rating or pickup of a device',
};

/** Said wherever a trial stands, so that nobody takes it for the run. */
export const trialCaution =
  'A trial: the run’s study with these changes. Nothing was applied for, nothing can be decided on it.';

function describeNeutral(neutral: Neutral): string {
  if (neutral.kind !== 'impedance') return neutral.kind === 'solid' ? 'solidly grounded' : 'ungrounded';
  return `through ${ohms(neutral.rOhm)} + j${ohms(neutral.xOhm)}`;
}

function ohms(value: number): string {
  return formatQuantity(value, 'Ω', 2);
}

function listParts(parts: readonly (string | undefined)[]): string {
  return parts.filter((part) => part !== undefined).join(', ');
}

const quantity = (name: string, value: number | undefined, unit: string, decimals = 1) =>
  value === undefined ? undefined : `${name} ${formatQuantity(value, unit, decimals)}`;

type Describe<K extends TrialChange['kind']> = (change: Extract<TrialChange, { kind: K }>) => string;

const describers: { [K in TrialChange['kind']]: Describe<K> } = {
  size: ({ factor }) => `Size of the project times ${formatNumber(factor, 2)}`,
  'export-limit': ({ kw }) =>
    kw === null ? 'No export limit' : `Export limit ${formatQuantity(kw, 'kW', 0)}`,
  'power-factor': ({ powerFactor, absorbs }) =>
    `Power factor ${formatNumber(powerFactor, 2)}, ${absorbs ? 'taking vars from' : 'sending vars into'} the grid`,
  'fault-current': ({ perUnit }) => `Inverter fault current ${formatNumber(perUnit, 2)} times rated`,
  transformer: (change) =>
    `Transformer ${change.element}: ${listParts([
      quantity('rating', change.kva, 'kVA', 0),
      quantity('impedance', change.impedancePercent, '%', 2),
      quantity('zero-sequence impedance', change.zeroImpedancePercent, '%', 2),
      change.connection && `windings ${change.connection}`,
      change.neutralFrom && `utility-side neutral ${describeNeutral(change.neutralFrom)}`,
      change.neutralTo && `site-side neutral ${describeNeutral(change.neutralTo)}`,
    ])}`,
  'machine-neutral': ({ element, neutral }) => `Neutral of machine ${element}: ${describeNeutral(neutral)}`,
  'add-bank': ({ node, rOhm, xOhm }) => `Ground bank at ${node}: ${ohms(rOhm)} + j${ohms(xOhm)}`,
  'change-bank': ({ element, rOhm, xOhm }) => `Ground bank ${element}: ${ohms(rOhm)} + j${ohms(xOhm)}`,
  'remove-bank': ({ element }) => `Ground bank ${element} removed`,
  device: (change) =>
    `Device ${change.element}: ${listParts([
      quantity('interrupting', change.interruptingKa, 'kA', 2),
      quantity('test X/R', change.testXr, '', 1),
      quantity('rated', change.ratedKv, 'kV', 2),
      quantity('fault-closing', change.faultClosingKa, 'kA', 2),
      quantity('phase pickup', change.phasePickupA, 'A', 0),
      quantity('ground pickup', change.groundPickupA, 'A', 0),
      change.directional === undefined ? undefined : change.directional ? 'directional' : 'not directional',
      change.voltageSupervised === undefined
        ? undefined
        : `closing ${change.voltageSupervised ? '' : 'not '}supervised by voltage`,
    ])}`,
};

/** One change as one line. */
export function describeChange<K extends TrialChange['kind']>(
  change: Extract<TrialChange, { kind: K }>,
): string {
  return (describers[change.kind] as Describe<K>)(change);
}
