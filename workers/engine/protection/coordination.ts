import type {
  CoordinatedDevice,
  Coordination,
  CoordinationElement,
  CoordinationPair,
  DeviceOperation,
  PairTimes,
  ZoneFault,
} from '../../../shared/schemas/coordination.ts';
import { coordinationCaution } from '../../../shared/schemas/coordination.ts';
import { nodeAt } from '../model-parts.ts';
import type { Screening } from '../findings/screening.ts';
import { Working } from '../working.ts';
import { describeChange } from './coordination-words.ts';
import type { PlacedFault, WatchedDevice } from './path-faults.ts';
import { listZoneFaults, watchPath } from './path-faults.ts';
import { plotCurve } from './plotted-curves.ts';
import { findMeltTime, findTripTime } from './time-curves.ts';
import type { Timed } from './time-working.ts';
import { workMargin } from './time-working.ts';

/**
 * Gives, for the devices between the source and the point of interconnection, their curves, the times in which they trip for
 * bolted faults at the near and far end of their zones, each by its own current, and the margin of each neighbouring pair,
 * before and after the project. Near ends have the strongest source, far ends the weakest; the model as it stands.
 */
export function findCoordination(screening: Screening): Coordination {
  const devices = watchPath(screening);
  const faults = new Map(devices.map((watched) => [watched, listZoneFaults(screening, watched)]));
  const pairs = devices.slice(1).flatMap((first, place) => {
    const backup = devices[place]!;
    return faults
      .get(first)!
      .map((fault) => ({ first, backup, fault, pair: timePair(screening, first, backup, fault) }));
  });
  return {
    devices: devices.map((watched) => describeDevice(screening, watched, faults.get(watched)!)),
    pairs: pairs.map(({ pair }) => pair),
    working: workTightest(pairs),
    caution: coordinationCaution,
  };
}

function describeDevice(
  screening: Screening,
  watched: WatchedDevice,
  faults: readonly PlacedFault[],
): CoordinatedDevice {
  const { device } = watched.zone;
  const zoneFaults = faults.map((fault): ZoneFault => {
    const { element, end, kind, node } = fault;
    const operate = (state: 'before' | 'after') => timeOf(watched, fault, state, 'totalClear');
    const place = nodeAt(screening.model, node).id;
    return { element, end, node: place, fault: kind, before: operate('before'), after: operate('after') };
  });
  const largest = Math.max(0, ...zoneFaults.flatMap(({ before, after }) => [before.amps, after.amps]));
  const { phaseCurve, groundCurve } = device;
  return {
    id: device.id,
    kind: device.kind,
    kv: nodeAt(screening.model, watched.zone.node).kv,
    phasePickupA: device.phasePickupA ?? null,
    groundPickupA: device.groundPickupA ?? null,
    directional: device.directional ?? null,
    deadTimeS: device.deadTimeS ?? null,
    phaseCurve: phaseCurve ? plotCurve(phaseCurve, largest) : null,
    groundCurve: groundCurve ? plotCurve(groundCurve, largest) : null,
    faults: zoneFaults,
  };
}

/** The curve by which a device sees a fault: a fuse has no ground element and melts by the current in its phase. */
function timedBy(
  { zone: { device } }: WatchedDevice,
  element: CoordinationElement,
  line: Timed['line'],
): (Timed & { quantity: CoordinationElement }) | undefined {
  const isFuse = device.phaseCurve?.kind === 'fuse' && !device.groundCurve;
  const quantity = isFuse ? 'phase' : element;
  const curve = quantity === 'phase' ? device.phaseCurve : device.groundCurve;
  return curve && { id: device.id, curve, line, quantity };
}

function timeOf(
  watched: WatchedDevice,
  fault: PlacedFault,
  state: 'before' | 'after',
  line: Timed['line'],
): DeviceOperation {
  const timed = timedBy(watched, fault.element, line);
  const amps = watched.ampsFor(fault, state, timed?.quantity ?? fault.element);
  if (!timed) return { amps, seconds: null };
  const { curve } = timed;
  const melts = curve.kind === 'fuse' && line === 'minimumMelt';
  return { amps, seconds: melts ? findMeltTime(curve, amps) : findTripTime(curve, amps) };
}

/** A fuse that backs up must not even begin to melt before the first has cleared. */
function timePair(
  { model }: Screening,
  first: WatchedDevice,
  backup: WatchedDevice,
  fault: PlacedFault,
): CoordinationPair {
  const timesIn = (state: 'before' | 'after'): PairTimes => {
    const ofFirst = timeOf(first, fault, state, 'totalClear');
    const ofBackup = timeOf(backup, fault, state, 'minimumMelt');
    const isTimed = ofFirst.seconds !== null && ofBackup.seconds !== null;
    return {
      first: ofFirst,
      backup: ofBackup,
      marginS: isTimed ? ofBackup.seconds! - ofFirst.seconds! : null,
    };
  };
  const pair = {
    first: first.zone.device.id,
    backup: backup.zone.device.id,
    element: fault.element,
    end: fault.end,
    node: nodeAt(model, fault.node).id,
    before: timesIn('before'),
    after: timesIn('after'),
  };
  return { ...pair, words: describeChange(pair) };
}

/** Writes down the pair with the least margin with the project, and what it was without. */
function workTightest(
  pairs: readonly {
    first: WatchedDevice;
    backup: WatchedDevice;
    fault: PlacedFault;
    pair: CoordinationPair;
  }[],
): Working['steps'] {
  const working = new Working();
  const marginOf = ({ pair }: (typeof pairs)[number]) => pair.after.marginS ?? Infinity;
  const tightest = pairs.reduce<(typeof pairs)[number] | undefined>(
    (p, q) => (p && marginOf(p) <= marginOf(q) ? p : q),
    undefined,
  );
  if (!tightest) return working.steps;
  const { first, backup, fault, pair } = tightest;
  const ofFirst = timedBy(first, fault.element, 'totalClear');
  const ofBackup = timedBy(backup, fault.element, 'minimumMelt');
  for (const state of ['before', 'after'] as const) {
    if (pair[state].marginS === null || !ofFirst || !ofBackup) continue;
    workMargin(working, ofFirst, ofBackup, pair[state], state);
  }
  return working.steps;
}
