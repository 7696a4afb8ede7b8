import type { Finding } from '../../../shared/schemas/findings.ts';
import type { Device } from '../../../shared/schemas/study.ts';
import { findDeviceDuty } from '../devices.ts';
import type { SolvedCase } from '../solve-case.ts';
import { solveCase } from '../solve-case.ts';
import { boundInverterRaise, findInverterRaise } from './inverter-raise.ts';
import { answer, findBrokenLimit, judge } from './judge.ts';
import type { Screening } from './screening.ts';
import { lacksGroundSource } from './screening.ts';

type Rated = Device & { interruptingKa: number };

/**
 * Does everything that interrupts faults keep its margin?
 * The whole fault current at each device over its rating, with the project, and without it where that is more. One finding
 * for the worst device, one for each further device outside, one for each without a rating.
 */
export function answerInterruptingDuty(screening: Screening): Finding[] {
  const devices = [...(screening.study.feeder.devices ?? []), ...(screening.project.devices ?? [])];
  if (devices.length === 0) {
    const note = 'The model names no device that interrupts faults.';
    return [answer(screening, 'interrupting-duty', 'needs-data', { note })];
  }
  const rated = devices.filter((device): device is Rated => device.interruptingKa !== undefined);
  const unrated = devices.filter((device) => device.interruptingKa === undefined);
  return [
    ...judgeRated(screening, rated),
    ...unrated.map(({ id }) =>
      answer(screening, 'interrupting-duty', 'needs-data', {
        element: id,
        note: 'Its interrupting rating is not known.',
      }),
    ),
  ];
}

/** How many devices have inverter currents added one by one; beyond that the bound of the sum stands for it. */
const mostExact = 64;

function judgeRated(screening: Screening, devices: readonly Rated[]): Finding[] {
  const { states, ruleSet } = screening;
  const rule = ruleSet.rules['interrupting-duty'];
  const after = loadingsIn(states.after);
  const before = loadingsIn(states.before);
  const bounded = devices
    .map((device) => ({ device, bound: after.bound(device) }))
    .sort((p, q) => q.bound - p.bound);

  const findings: Finding[] = [];
  let worst = 0;
  for (const { device, bound } of bounded) {
    // From here on no device can be the worst or outside.
    if (findings.length > 0 && bound <= worst && !findBrokenLimit(rule, bound)) break;
    const measure = findings.length < mostExact ? ('exact' as const) : ('bound' as const);
    const isOfProject = screening.project.devices?.includes(device) ?? false;
    const loading = { after: after[measure](device), before: isOfProject ? null : before[measure](device) };
    const finding = judgeDevice(screening, device, loading, measure);
    worst = Math.max(worst, finding.value ?? 0);
    findings.push(finding);
  }
  findings.sort((p, q) => (q.value ?? 0) - (p.value ?? 0));
  return findings.filter((finding, place) => place === 0 || finding.verdict !== 'within');
}

function judgeDevice(
  screening: Screening,
  device: Rated,
  { after, before }: { after: number; before: number | null },
  measure: 'exact' | 'bound',
): Finding {
  const value = Math.max(after, before ?? 0);
  const amperes = ((value / 100) * device.interruptingKa * 1000).toFixed(0);
  const notes = [`${amperes} A available against a rating of ${device.interruptingKa} kA.`];
  if (value > after) notes.push('It is more without the project, and that decides.');
  if (measure === 'bound') notes.push('Inverter currents are counted at a bound of their sum.');
  const finding = judge(screening, 'interrupting-duty', {
    element: device.id,
    value,
    before,
    note: notes.join(' '),
  });
  if (finding.verdict !== 'within' || !lacksGroundSource(screening)) return finding;
  const note = 'A source gives no zero-sequence impedance, so ground faults may be larger than computed.';
  return answer(screening, 'interrupting-duty', 'needs-data', { element: device.id, note });
}

/**
 * Measures a device in percent of its rating: the larger of the phasor result and the current without inverters with
 * theirs added in magnitude, or with a bound of those.
 */
function loadingsIn(solved: SolvedCase) {
  const { model, choice } = solved;
  const bare = solveCase(model, { ...choice, inverters: 'none' });
  const boundRaise = boundInverterRaise(solved);
  const measure = (raiseAt: (node: number) => number) => (device: Rated) => {
    const node = model.branches[model.branchIndex.get(device.branch)!]![device.end];
    const phasors = findDeviceDuty(solved, device).availableA;
    const magnitudes = findDeviceDuty(bare, device).availableA * (1 + raiseAt(node));
    return (Math.max(phasors, magnitudes) / (device.interruptingKa * 1000)) * 100;
  };
  return { exact: measure((node) => findInverterRaise(solved, node)), bound: measure(boundRaise) };
}
