import type { Finding, QuestionId } from '../../../shared/schemas/findings.ts';
import { pairFindings } from '../../../shared/rules/pair-findings.ts';
import type { RemediesView, Remedy } from '../../../shared/schemas/remedies.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { FindingPair } from '../../../shared/schemas/trials.ts';
import type { ProjectStudy } from '../findings/make-screening.ts';
import { screenStudy, tryChanges } from '../trials.ts';
import {
  proposeInverterBank,
  proposeMachineBank,
  proposeMachineNeutral,
  proposeNeutralReactor,
  proposeWindings,
} from './grounding.ts';
import type { Proposer } from './remedy-tests.ts';
import { makeSearch } from './remedy-tests.ts';
import { exceptForRise, proposeRiseExport, proposeRisePowerFactor } from './rise.ts';
import { proposeReplacement } from './replacement-rating.ts';
import { proposeExportLimit, proposeImpedance, proposePowerFactor, proposeSize } from './sizes.ts';

/** What may bring each question within, the mildest first. */
const proposersOf: Partial<Record<QuestionId, readonly Proposer[]>> = {
  'fast-track-size': [proposeSize],
  'section-peak-load': [proposeExportLimit, proposeSize],
  'spot-network': [proposeSize],
  contribution: [proposeNeutralReactor, proposeImpedance, proposeSize],
  'interrupting-duty': [proposeReplacement, proposeNeutralReactor, proposeImpedance, proposeSize],
  'transformer-connection': [proposeWindings, proposeMachineBank, proposeInverterBank],
  'shared-secondary': [proposeSize],
  'transient-stability': [proposeSize],
  'minimum-load': [proposeExportLimit, proposeSize],
  'effective-grounding': [proposeMachineNeutral, proposeWindings, proposeMachineBank],
  'inverter-grounding': [proposeInverterBank, proposeSize],
  'high-side-float': [proposeSize],
  'load-rejection': [proposeSize],
  'steady-voltage': [
    proposeRisePowerFactor,
    proposeRiseExport,
    exceptForRise(proposePowerFactor),
    exceptForRise(proposeExportLimit),
    proposeSize,
  ],
  'rapid-voltage-change': [proposePowerFactor, proposeSize],
  'short-circuit-ratio': [proposeSize],
  'ground-reach': [proposeNeutralReactor, proposeSize],
  'phase-reach': [proposeImpedance, proposeSize],
  'sympathetic-trip': [proposeNeutralReactor, proposeImpedance, proposeSize],
  islanding: [proposeSize],
  'reverse-flow': [proposeExportLimit, proposeSize],
  service: [proposeExportLimit, proposeSize],
};

/**
 * Lists what would bring each finding that is outside within its limit. Every remedy is run through all findings: what it also
 * mends, what it leaves open and what it makes worse stands with it.
 */
export function listRemedies(study: ProjectStudy, ruleSet: RuleSet): Omit<RemediesView, 'runId'> {
  const screened = screenStudy(study, ruleSet);
  if ('problems' in screened) return { remedies: [], without: [] };
  const remedies: Remedy[] = [];
  const without: RemediesView['without'] = [];
  for (const finding of screened.findings.filter(({ verdict }) => verdict === 'outside')) {
    const { id: question, element = null } = finding;
    const tried: string[] = [];
    const search = makeSearch(study, ruleSet, finding, screened.findings);
    let found = 0;
    for (const propose of proposersOf[question as QuestionId] ?? []) {
      const proposal = propose(search);
      if (typeof proposal === 'string') tried.push(proposal);
      if (typeof proposal !== 'object') continue;
      const after = tryChanges(study, proposal.changes, ruleSet);
      if ('problems' in after) continue;
      const compared = compare(screened.findings, after.findings);
      // With all else asked too it may lack data, which is no remedy.
      if (!compared.fixes.includes(finding)) {
        tried.push(`${proposal.words} That would leave it unanswered.`);
        continue;
      }
      found++;
      remedies.push({ question, element, ...proposal, ...compared });
    }
    if (found > 0) continue;
    const words = tried.length > 0 ? tried.join(' ') : 'Nothing that this desk computes would change it.';
    without.push({ question, element, words });
  }
  return { remedies, without };
}

function compare(before: readonly Finding[], after: readonly Finding[]) {
  const pairs = pairFindings(before, after);
  const isOpen = (finding: Finding | null) =>
    finding?.verdict === 'outside' || finding?.verdict === 'needs-data';
  return {
    fixes: pairs.flatMap(({ run, trial }) => (run?.verdict === 'outside' && !isOpen(trial) ? [run] : [])),
    leaves: pairs.flatMap(({ trial }) => (trial && isOpen(trial) ? [trial] : [])),
    worse: pairs.filter(isWorse),
  };
}

const gravity = { 'not-applicable': 0, within: 0, 'needs-data': 1, outside: 2 } as const;

/** Less than this share of the limit is not worth a word. */
const noticed = 0.01;

function isWorse({ run, trial }: FindingPair): boolean {
  if (!trial) return false;
  const before = run ? gravity[run.verdict] : 0;
  if (gravity[trial.verdict] !== before) return gravity[trial.verdict] > before;
  if (run?.value == null || trial.value === null || trial.limit === null) return false;
  const change = (trial.value - run.value) * (trial.comparison === '>=' ? -1 : 1);
  return change > noticed * Math.abs(trial.limit);
}
