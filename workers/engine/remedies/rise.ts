import { makeScreening } from '../findings/make-screening.ts';
import { findExportForRise, findPowerFactorForRise } from '../flow/rise-remedies.ts';
import type { Proposer } from './remedy-tests.ts';

/* For the rise at the point of interconnection: vars, or less export, found on load flows that are prepared once. */

const riseSource = 'unbalanced load flow at peak and minimum load, worst of all operating cases';

function isRise(element: string | undefined): boolean {
  return element?.endsWith('(rise)') ?? false;
}

/** The same question is asked of the range of the voltage too, for which these look one size at a time. */
export function exceptForRise(propose: Proposer): Proposer {
  return (search) => (isRise(search.finding.element) ? undefined : propose(search));
}

export const proposeRisePowerFactor: Proposer = ({ study, ruleSet, finding, holds }) => {
  if (!isRise(finding.element) || finding.limit === null) return undefined;
  const found = findPowerFactorForRise(makeScreening(study, ruleSet), finding.limit);
  const changes = [{ kind: 'power-factor' as const, absorbs: true, powerFactor: Math.abs(found ?? 0.85) }];
  if (found === undefined || !holds(changes)) return 'A power factor of 0.85 would still be outside.';
  const powerFactor = Math.abs(found);
  return {
    words: `Run the project at a power factor of ${powerFactor.toFixed(2)}, taking vars from the grid.`,
    changes,
    figures: [{ words: 'Power factor', value: powerFactor, unit: '', source: riseSource }],
  };
};

export const proposeRiseExport: Proposer = ({ study, ruleSet, finding, holds }) => {
  if (!isRise(finding.element) || finding.limit === null) return undefined;
  const kw = findExportForRise(makeScreening(study, ruleSet), finding.limit);
  if (kw === undefined || !holds([{ kind: 'export-limit', kw }])) {
    return 'It would still be outside without any export.';
  }
  return {
    words: `Limit the export to ${kw} kW.`,
    changes: [{ kind: 'export-limit', kw }],
    figures: [{ words: 'Largest export', value: kw, unit: 'kW', source: riseSource }],
  };
};
