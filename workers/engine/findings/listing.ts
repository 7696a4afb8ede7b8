import type { Listing } from '../../../shared/schemas/study-utility.ts';
import { Working } from '../working.ts';
import type { Generator } from './island-generation.ts';
import { listGenerators } from './island-generation.ts';
import type { Answered } from './judge.ts';
import { answer, judge, ruleOf } from './judge.ts';
import type { Screening } from './screening.ts';

const question = 'listing';

/**
 * Is the equipment listed, and are its harmonics within limits?
 * Every generator of the project: the standard that it is listed to is one of the rule set's `standards`, its category and its settings
 * profile are known, and its total rated-current distortion keeps the limit. The worst decides, and each that is not within
 * is a finding of its own.
 */
export function answerListing(screening: Screening): Answered[] {
  const generators = listGenerators(screening).filter(({ ofProject }) => ofProject);
  if (generators.length === 0) {
    return [answer(screening, question, 'not-applicable', { note: 'The project has no generator.' })];
  }
  const findings = generators.map((generator) => judgeGenerator(screening, generator));
  const open = findings.filter(({ verdict }) => verdict !== 'within');
  if (open.length > 0) return open;
  return [findings.reduce((p, q) => (q.value! > p.value! ? q : p))];
}

function judgeGenerator(screening: Screening, { id, unit }: Generator): Answered {
  const { listing } = unit.kind === 'machine' ? unit.machine : unit.inverter;
  const listed = unit.kind === 'inverter' ? unit.inverter.listed : undefined;
  const refusal = findRefusal(screening, listing, listed);
  const missing = listMissing(listing, listed);
  if (listing?.trdPercent === undefined) {
    const note = refusal ?? `Not known: ${missing.join(', ')}.`;
    return answer(screening, question, refusal ? 'outside' : 'needs-data', { element: id, note });
  }
  if (refusal) {
    const note = `${refusal} Its total rated-current distortion is ${listing.trdPercent} %.`;
    return answer(screening, question, 'outside', { element: id, note });
  }
  const working = new Working();
  working.given('TRD', `Total rated-current distortion of ${id}, from its sheet`, listing.trdPercent, '%');
  const says = [
    listing.standard ?? 'listed',
    listing.category && `category ${listing.category}`,
    listing.profile,
  ];
  const judged = judge(screening, question, {
    element: id,
    value: listing.trdPercent,
    note: `${id}: ${says.filter(Boolean).join(', ')}; total rated-current distortion ${listing.trdPercent} %.`,
    working: working.steps,
  });
  if (judged.verdict === 'outside' || missing.length === 0) return judged;
  const note = `Not known: ${missing.join(', ')}.`;
  return answer(screening, question, 'needs-data', { element: id, note, working: working.steps });
}

/** Why the equipment cannot count as listed, whatever else is known of it. */
function findRefusal(
  screening: Screening,
  listing: Listing | undefined,
  listed: boolean | undefined,
): string | undefined {
  if (listed === false) return 'It is not listed.';
  if (listing?.standard === undefined) return undefined;
  const { standards } = ruleOf(screening, question).parameters ?? {};
  if (typeof standards !== 'string') return undefined;
  const given = listing.standard.trim().toLowerCase();
  const accepted = standards.split(';').map((each) => each.trim().toLowerCase());
  // "UL 1741 SB" and "UL 1741:2021" are UL 1741, "UL 17410" is not.
  const isAccepted = accepted.some(
    (each) => given.startsWith(each) && !/^[a-z0-9]/.test(given.slice(each.length)),
  );
  return isAccepted ? undefined : `It is listed to ${listing.standard}, which is none of: ${standards}.`;
}

function listMissing(listing: Listing | undefined, listed: boolean | undefined): string[] {
  return [
    ...(listing?.standard === undefined && !listed ? ['the standard it is listed to'] : []),
    ...(listing?.category === undefined ? ['its performance category'] : []),
    ...(listing?.profile === undefined ? ['its settings profile'] : []),
    ...(listing?.trdPercent === undefined ? ['its total rated-current distortion'] : []),
  ];
}
