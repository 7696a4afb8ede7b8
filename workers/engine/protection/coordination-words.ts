import { formatNumber } from '../../../shared/format.ts';
import type { CoordinationPair, DeviceOperation } from '../../../shared/schemas/coordination.ts';

/** Says in one sentence what the project changes between two neighbours. */
export function describeChange(pair: Omit<CoordinationPair, 'words'>): string {
  const { first, backup, element, end, node, before, after } = pair;
  const fault = `For a ${element === 'phase' ? 'phase' : 'ground'} fault at the ${end} end of the zone of ${first} (${node})`;
  const margin = describeMargin(before.marginS, after.marginS);
  return (
    `${fault} ${first} carries ${currents(before.first, after.first)} and ${times(before.first, after.first)}; ` +
    `${backup} carries ${currents(before.backup, after.backup)} and ${times(before.backup, after.backup)}; ${margin}.`
  );
}

function currents(before: DeviceOperation, after: DeviceOperation): string {
  const [was, is] = [formatNumber(before.amps), formatNumber(after.amps)];
  return was === is ? `${is} A, as before` : `${is} A instead of ${was} A`;
}

function times(before: DeviceOperation, after: DeviceOperation): string {
  const [was, is] = [inWords(before.seconds), inWords(after.seconds)];
  return was === is ? is : `${is} (before: ${was})`;
}

function inWords(seconds: number | null): string {
  return seconds === null ? 'has no known trip' : `trips in ${formatNumber(seconds, 3)} s`;
}

function describeMargin(before: number | null, after: number | null): string {
  if (before === null && after === null) return 'the margin is not known';
  const say = (margin: number | null) =>
    margin === null ? 'not known' : `${formatNumber(tidy(margin), 3)} s`;
  return say(before) === say(after)
    ? `the margin stays ${say(after)}`
    : `the margin goes from ${say(before)} to ${say(after)}`;
}

/** To the millisecond, and without a sign on nothing. */
function tidy(margin: number): number {
  return Math.round(margin * 1000) / 1000 + 0;
}
