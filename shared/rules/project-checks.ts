import type { ConnectionAnswers } from '../schemas/answers.ts';
import type { TransformerNameplate } from '../schemas/equipment.ts';
import type { FieldProblem } from '../schemas/problems.ts';
import {
  findTransformerRatings,
  type ElectricalAnswers,
  type PointOfInterconnection,
} from './project-electrical.ts';
import { isMachineGroup, readUnitGroups, totalKva, totalKw, type UnitGroup } from './project-units.ts';

/* What must be true of equipment and connection together before they can be computed. Common practice, no source. */

const kvHighTolerance = 0.05;
const unitKvTolerance = 0.1;
/** Of the units' total kVA. */
const leastTransformerShare = 0.8;
/** What one phase of a feeder may be asked to carry before a person looks at it. */
const mostOnePhaseUnitKva = 100;
const mostOnePhaseKva = 250;

function isNear(got: number, expected: number, tolerance: number): boolean {
  // A hair wider than said, so that 4.368 against 4.16 is within 5 % in floating point too.
  return Math.abs(got - expected) <= expected * tolerance * (1 + 1e-9);
}

const trim = (value: number) => String(Number(value.toPrecision(6)));
const name = ({ index }: UnitGroup) => `unit group ${index + 1}`;

/** What is wrong with the units by themselves; paths below `equipment`. */
export function listEquipmentProblems({
  equipment,
  records,
}: Pick<ElectricalAnswers, 'equipment' | 'records'>): FieldProblem[] {
  const { groups, problems } = readUnitGroups(equipment, records);
  const sizeKw = totalKw(groups);
  const isLimitTooHigh = problems.length === 0 && (equipment.exportKw ?? 0) > sizeKw;
  if (!isLimitTooHigh) return problems;
  const message = `Export limit must not be more than all units together: got ${trim(equipment.exportKw ?? 0)} kW, the units make ${trim(sizeKw)} kW`;
  return [{ path: 'exportKw', message }];
}

function checkOnePhaseSize(groups: UnitGroup[]): FieldProblem[] {
  const problems: FieldProblem[] = [];
  const tooLarge = groups.find(({ ratings }) => ratings.kva > mostOnePhaseUnitKva);
  if (tooLarge !== undefined) {
    const got = trim(tooLarge.ratings.kva);
    const message = `A one-phase unit may have ${mostOnePhaseUnitKva} kVA at most: got ${got} kVA for ${name(tooLarge)}`;
    problems.push({ path: 'phases', message });
  }
  if (totalKva(groups) > mostOnePhaseKva) {
    const message = `A one-phase project may have ${mostOnePhaseKva} kVA at most: got ${trim(totalKva(groups))} kVA from all units together`;
    problems.push({ path: 'phases', message });
  }
  return problems;
}

function checkOnePhase(connection: ConnectionAnswers, groups: UnitGroup[]): FieldProblem[] {
  const problems: FieldProblem[] = [];
  if (groups.some(isMachineGroup)) {
    problems.push({ path: 'phases', message: 'Rotating machines need a three-phase connection' });
  }
  const threePhase = groups.find((group) => group.phases === 'three');
  if (threePhase !== undefined && !isMachineGroup(threePhase)) {
    problems.push({
      path: 'phases',
      message: `Got a one-phase connection, but ${name(threePhase)} is three-phase`,
    });
  }
  if (connection.transformer !== undefined) {
    const message =
      'A one-phase project connects behind the utility’s service transformer: leave the transformer out';
    problems.push({ path: 'transformer', message });
  }
  // Units that do not belong on one phase at all need no word about their size.
  const doesFit = problems.every(({ path }) => path !== 'phases');
  return doesFit ? [...problems, ...checkOnePhaseSize(groups)] : problems;
}

function checkThreePhaseUnits(connection: ConnectionAnswers, groups: UnitGroup[]): FieldProblem[] {
  const problems: FieldProblem[] = [];
  const onePhase = groups.find((group) => group.phases === 'one');
  if (onePhase !== undefined) {
    problems.push({
      path: 'phases',
      message: `Got a three-phase connection, but ${name(onePhase)} is one-phase`,
    });
  }
  const hasSynchronous = groups.some((group) => group.kind === 'synchronous-machine');
  if (hasSynchronous && connection.machineNeutral === undefined) {
    problems.push({ path: 'machineNeutral', message: 'Say how the neutral of the machine is grounded' });
  }
  return problems;
}

function checkTransformer(
  connection: ConnectionAnswers,
  ratings: TransformerNameplate,
  groups: UnitGroup[],
  poiKv: number | undefined,
): FieldProblem[] {
  const isTyped = connection.transformer?.rating.source === 'nameplate';
  const at = (field: string) => `transformer.rating.${isTyped ? `nameplate.${field}` : 'equipmentId'}`;
  const problems: FieldProblem[] = [];
  if (poiKv !== undefined && !isNear(ratings.kvHigh, poiKv, kvHighTolerance)) {
    const message = `Utility-side voltage must be within 5 % of the feeder’s: got ${trim(ratings.kvHigh)} kV, expected ${trim(poiKv)} kV`;
    problems.push({ path: at('kvHigh'), message });
  }
  const misfit = groups.find((group) => !isNear(group.ratings.kv, ratings.kvLow, unitKvTolerance));
  if (misfit !== undefined) {
    const message = `Site-side voltage must be within 10 % of the units’: got ${trim(ratings.kvLow)} kV, expected ${trim(misfit.ratings.kv)} kV for ${name(misfit)}`;
    problems.push({ path: at('kvLow'), message });
  }
  const leastKva = leastTransformerShare * totalKva(groups);
  if (ratings.kva < leastKva) {
    const message = `Transformer must carry at least 80 % of the units’ ${trim(totalKva(groups))} kVA: got ${trim(ratings.kva)} kVA, expected ${trim(leastKva)} kVA or more`;
    problems.push({ path: at('kva'), message });
  }
  return problems;
}

function checkDirect(groups: UnitGroup[], poiKv: number | undefined): FieldProblem[] {
  const misfit = groups.find(
    (group) => poiKv !== undefined && !isNear(group.ratings.kv, poiKv, unitKvTolerance),
  );
  if (misfit === undefined || poiKv === undefined) return [];
  const message = `Without a transformer the units must be rated for the feeder’s voltage: got ${trim(misfit.ratings.kv)} kV for ${name(misfit)}, expected ${trim(poiKv)} kV within 10 %`;
  return [{ path: 'transformer', message }];
}

/**
 * What keeps the connection from fitting the units and the feeder; paths below `connection`. Before the site or the units
 * are known, pass what is there: what cannot be judged yet is no problem.
 */
export function listConnectionProblems(
  answers: ElectricalAnswers,
  poi: PointOfInterconnection | undefined,
): FieldProblem[] {
  const { connection, records } = answers;
  const { groups } = readUnitGroups(answers.equipment, records);
  if (connection.phases === 'one') return checkOnePhase(connection, groups);
  const problems = checkThreePhaseUnits(connection, groups);
  if (connection.transformer === undefined) return [...problems, ...checkDirect(groups, poi?.kv)];
  const ratings = findTransformerRatings(connection, records);
  if (ratings === undefined) {
    const message = 'That transformer is not in the records any more; choose another';
    return [...problems, { path: 'transformer.rating.equipmentId', message }];
  }
  return [...problems, ...checkTransformer(connection, ratings, groups, poi?.kv)];
}
