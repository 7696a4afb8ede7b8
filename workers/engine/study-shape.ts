import { studyFormat } from '../../shared/schemas/study.ts';
import { constructionLists } from './line-shape.ts';
import { scenario } from './scenario-shape.ts';
import { expect, listOf, name, notNegative, object, oneOf, positive, text, truth } from './shape.ts';
import { elementLists, node } from './study-shape-equipment.ts';
import { utilityLists } from './study-shape-utility.ts';

/* The study file's shape: which fields, of which kind, within which bounds. What joins elements is checked elsewhere. */

const options = object(
  {},
  {
    method: oneOf('prefault', 'iec60909'),
    lowVoltageTolerancePercent: expect('6 or 10', (value) => value === 6 || value === 10),
    motorLoad: truth,
  },
);

const feeder = object(
  { nodes: listOf(node, 1) },
  { ...elementLists, ...constructionLists, ...utilityLists, scenarios: listOf(scenario) },
);

const project = object(
  { id: name, node: name },
  { nodes: listOf(node), panelInterruptingKa: positive, ...elementLists },
);

/** Checks the whole file but for what one element says of another. */
export const checkStudyShape = object(
  {
    format: oneOf(studyFormat),
    frequencyHz: positive,
    baseMva: positive,
    prefaultFactor: object({ max: positive, min: positive }),
    feeder,
  },
  { name: text, minimumFaultOhm: notNegative, project, options },
);
