import type { AskedQuestionId, Finding, Verdict } from '../../shared/schemas/findings.ts';

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
const lackWords: Record<AskedQuestionId, string> = {
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

function sayLack({ id, verdict }: Finding): Pick<Finding, 'note'> {
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
    return { ...released, ...sayLack(finding) };
  });
}
