import { projectKva } from '../project-size.ts';
import type { Proposer } from './remedy-tests.ts';
import { findLast } from './remedy-tests.ts';

/* Less of it: a smaller project, a lower export limit, more impedance, vars. */

const ownComputation = 'tried in steps, each through the question itself';

/** The largest size, in hundredths of what was handed in, at which the question is answered within. */
export const proposeSize: Proposer = ({ study, holds }) => {
  const hundredths = findLast(1, 99, (number) => holds([{ kind: 'size', factor: number / 100 }]));
  if (hundredths === undefined) return 'A hundredth of the size would still be outside.';
  const factor = hundredths / 100;
  const kva = projectKva(study.project) * factor;
  return {
    words: `Make the project no larger than ${kva.toFixed(0)} kVA, which is ${hundredths} % of what was handed in.`,
    changes: [{ kind: 'size', factor }],
    figures: [{ words: 'Largest size', value: kva, unit: 'kVA', source: ownComputation }],
  };
};

/** The largest export, in hundredths of the nameplate, at which the question is answered within. */
export const proposeExportLimit: Proposer = ({ study, holds }) => {
  const total = projectKva(study.project);
  const kwOf = (hundredths: number) => Math.floor((total * hundredths) / 100);
  const hundredths = findLast(0, 99, (number) => holds([{ kind: 'export-limit', kw: kwOf(number) }]));
  if (hundredths === undefined) return 'It would still be outside without any export.';
  const kw = kwOf(hundredths);
  return {
    words: `Limit the export to ${kw} kW.`,
    changes: [{ kind: 'export-limit', kw }],
    figures: [{ words: 'Largest export', value: kw, unit: 'kW', source: ownComputation }],
  };
};

/** Beyond, a transformer of a project's size is a special one. Common practice, no source. */
const mostImpedancePercent = 12;

/** The least impedance of the project's transformer, in tenths of a percent, at which the question is answered within. */
export const proposeImpedance: Proposer = ({ study, holds }) => {
  const transformer = study.project.transformers?.[0];
  if (!transformer) return undefined;
  const least = Math.floor(transformer.impedancePercent * 10) + 1;
  const most = Math.round(mostImpedancePercent * 10);
  if (least > most) return undefined;
  const changeTo = (tenths: number) => [
    { kind: 'transformer' as const, element: transformer.id, impedancePercent: tenths / 10 },
  ];
  // More impedance helps: counted down from the most.
  const steps = findLast(0, most - least, (down) => holds(changeTo(most - down)));
  if (steps === undefined) {
    return `A transformer of ${mostImpedancePercent} % would still be outside.`;
  }
  const percent = (most - steps) / 10;
  return {
    words: `Give the project's transformer an impedance of at least ${percent.toFixed(1)} %.`,
    changes: changeTo(most - steps),
    figures: [{ words: 'Least impedance', value: percent, unit: '%', source: ownComputation }],
  };
};

/** Below this, most inverters lose too much of their rating. Common practice, no source. */
const leastPowerFactor = 0.85;

/** The power factor nearest to 1 that takes vars from the grid and brings the question within. */
export const proposePowerFactor: Proposer = ({ holds }) => {
  const changeTo = (hundredths: number) => [
    { kind: 'power-factor' as const, absorbs: true, powerFactor: hundredths / 100 },
  ];
  const least = Math.round(leastPowerFactor * 100);
  const steps = findLast(0, 99 - least, (up) => holds(changeTo(least + up)));
  if (steps === undefined) return `A power factor of ${leastPowerFactor} would still be outside.`;
  const powerFactor = (least + steps) / 100;
  return {
    words: `Run the project at a power factor of ${powerFactor.toFixed(2)}, taking vars from the grid.`,
    changes: changeTo(least + steps),
    figures: [{ words: 'Power factor', value: powerFactor, unit: '', source: ownComputation }],
  };
};
