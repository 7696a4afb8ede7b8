import type { Finding, QuestionId, Verdict } from '../../shared/schemas/findings.ts';

const gravity: Record<Verdict, number> = { outside: 3, 'needs-data': 2, within: 1, 'not-applicable': 0 };

function isGraver(finding: Finding, other: Finding): boolean {
  if (finding.verdict !== other.verdict) return gravity[finding.verdict] > gravity[other.verdict];
  if (finding.value === null || other.value === null) return false;
  return finding.comparison === '>=' ? finding.value < other.value : finding.value > other.value;
}

/**
 * Why a question could not be answered, in words that hold for everything the engine may have missed there: no device,
 * node or project of another can be read out of them.
 */
const lackWords: Record<QuestionId, string> = {
  'fast-track-size':
    'The utility’s records of this feeder lack what Fast Track eligibility is read from here.',
  jurisdiction: 'The utility’s records of this feeder lack whether these rules apply to it.',
  'spot-network': 'The utility’s records of this feeder lack the load of the network here.',
  'shared-secondary': 'The utility’s records of this feeder lack what else is connected to this secondary.',
  'centre-tap-balance':
    'The utility’s records of this feeder lack the service transformer here, or how the project divides between its halves.',
  'transient-stability':
    'The utility’s records of this feeder lack whether a transient-stability limitation is posted, or the total it applies to.',
  'no-construction':
    'The utility’s records of this feeder lack answers that this one follows from; they are asked above.',
  'minimum-load': 'The utility’s records of this feeder lack the minimum load of a line section here.',
  'voltage-quality':
    'The utility’s records of this feeder lack answers about voltage that this one follows from.',
  'safety-reliability':
    'The utility’s records of this feeder lack what describes its line section: length, loading, uniformity, transfers.',
  'inverter-grounding':
    'The utility’s records of this feeder lack the minimum load of what would be cut off, or what the inverters are.',
  'high-side-float':
    'The utility’s records of this feeder lack what is known of its substation transformer and its protection.',
  'load-rejection': 'The utility’s records of this feeder lack the minimum load of what would be cut off.',
  'steady-voltage':
    'The utility’s records of this feeder lack loads or settings that its voltage follows from.',
  'rapid-voltage-change':
    'The utility’s records of this feeder lack what the project’s voltage change follows from here.',
  'ground-reach': 'The utility’s records of this feeder lack the ground pickup of a device.',
  'phase-reach': 'The utility’s records of this feeder lack the phase pickup of a device.',
  'sympathetic-trip': 'The utility’s records of this feeder lack the pickup of the feeder breaker.',
  islanding: 'The utility’s records of this feeder lack the minimum load of what could stay alive alone.',
  reclosing: 'The utility’s records of this feeder lack how its devices reclose.',
  'reverse-flow':
    'The utility’s records of this feeder lack ratings of lines, transformers or regulators on the way.',
  service: 'The utility’s records of this feeder lack the service transformer or the drop to the project.',
  listing: 'The utility’s records of this feeder lack the listing of the equipment.',
  'section-peak-load':
    'The utility’s records of this feeder lack a peak load that the generation of the line section here can be held against.',
  contribution: 'The utility’s records of this feeder lack what its source gives to a fault here.',
  'interrupting-duty':
    'The utility’s records of this feeder lack the interrupting rating of some equipment, or what the source gives to a ground fault.',
  'transformer-connection':
    'The utility’s records of this feeder lack the type of line, or what it takes to tell whether the project is effectively grounded.',
  'effective-grounding':
    'The utility’s records of this feeder lack a device that would cut this place off from its source.',
  'short-circuit-ratio': 'The utility’s records of this feeder lack a source for this place.',
};

/** Why an answer without a number is no, in words that hold for every reason the engine may have had. */
const refusalWords: Partial<Record<QuestionId, string>> = {
  jurisdiction: 'These rules do not apply to the system at this place.',
  'spot-network': 'The place is on a network of several transformers, which takes a study.',
  'transformer-connection':
    'The windings of the project, or the way it is grounded, do not suit the type of line here.',
  'no-construction': 'Other answers call for work on the utility’s system.',
  'voltage-quality': 'An answer about steady voltage, its changes or harmonics is outside its limit.',
  'safety-reliability': 'Something about the line section here calls for the study process.',
  islanding: 'Generation here can hold voltage without the utility, which takes a study at any size.',
  reclosing: 'A device on the way may close again before generation has surely stopped.',
  'reverse-flow': 'Power would flow back through equipment that is not set up for it.',
  listing: 'The equipment is not listed as the rules ask.',
};

function sayWhy({ id, verdict, value }: Finding): Pick<Finding, 'note'> {
  if (verdict === 'outside' && value === null) {
    const words = (refusalWords as Partial<Record<string, string>>)[id];
    return { note: words ?? 'What the utility knows of this place speaks against it.' };
  }
  if (verdict !== 'needs-data') return {};
  const words = (lackWords as Partial<Record<string, string>>)[id];
  return { note: words ?? 'The utility’s records of this feeder lack what it takes to answer this.' };
}

/**
 * Findings as an applicant may read them: of each question the answer that decides, and of that what was measured and
 * what the limit is, or in general words what is missing. Which device or node it was, how many there are, and what was
 * there before stay with the utility.
 */
export function releaseFindings(findings: readonly Finding[]): Finding[] {
  const deciding = new Map<string, Finding>();
  for (const finding of findings) {
    const known = deciding.get(finding.id);
    if (known === undefined || isGraver(finding, known)) deciding.set(finding.id, finding);
  }
  return [...deciding.values()].map((finding) => {
    const { id, question, verdict, value, comparison, limit, unit, consequence, source } = finding;
    const released = { id, question, verdict, value, comparison, limit, unit, consequence, source };
    return { ...released, ...sayWhy(finding) };
  });
}
