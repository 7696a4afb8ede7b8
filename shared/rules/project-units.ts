import type { EquipmentAnswers } from '../schemas/answers.ts';
import type {
  EquipmentView,
  GeneratorKind,
  InverterNameplate,
  MachineNameplate,
} from '../schemas/equipment.ts';
import type { FieldProblem } from '../schemas/problems.ts';

/** The released record that an answer names by its public id. */
export type EquipmentRecords = ReadonlyMap<string, Pick<EquipmentView, 'kind' | 'phases' | 'ratings'>>;

interface UnitGroupBase {
  /** Place in the answers, from 0. */
  index: number;
  count: number;
  /** Known of records; a nameplate does not say it. */
  phases: 'three' | 'one' | null;
  /** Where an error about the ratings belongs, below `equipment`. */
  path: string;
}

export interface InverterGroup extends UnitGroupBase {
  kind: 'pv-inverter' | 'battery-inverter';
  ratings: InverterNameplate;
}

export interface MachineGroup extends UnitGroupBase {
  kind: 'synchronous-machine' | 'induction-machine';
  ratings: MachineNameplate;
}

/** Equal units of the project with their ratings, wherever those came from. */
export type UnitGroup = InverterGroup | MachineGroup;

export function isMachineGroup(group: UnitGroup): group is MachineGroup {
  return group.kind === 'synchronous-machine' || group.kind === 'induction-machine';
}

function toGroup(kind: GeneratorKind, ratings: EquipmentView['ratings'], base: UnitGroupBase): UnitGroup {
  return { ...base, kind, ratings } as UnitGroup;
}

function readRatingProblems(group: UnitGroup): FieldProblem[] {
  const { kw, kva } = group.ratings;
  if (kw <= kva) return [];
  const path = `${group.path}${group.path.endsWith('nameplate') ? '.kw' : ''}`;
  const message = `Rated power must not be more than rated apparent power: got ${kw} kW and ${kva} kVA`;
  return [{ path, message }];
}

/** The unit groups of the answers, and what is wrong with them taken by themselves (paths below `equipment`). */
export function readUnitGroups(
  answers: EquipmentAnswers,
  records: EquipmentRecords,
): { groups: UnitGroup[]; problems: FieldProblem[] } {
  const groups: UnitGroup[] = [];
  const problems: FieldProblem[] = [];
  for (const [index, unit] of answers.units.entries()) {
    const at = `units.${index}`;
    if (unit.source === 'nameplate') {
      const base = { index, count: unit.count, phases: null, path: `${at}.nameplate` };
      groups.push(toGroup(unit.kind, unit.nameplate, base));
      continue;
    }
    const path = `${at}.equipmentId`;
    const record = records.get(unit.equipmentId);
    if (record === undefined) {
      problems.push({ path, message: 'That model is not in the records any more; choose another' });
    } else if (record.kind === 'transformer') {
      problems.push({ path, message: 'Choose a generating unit; the transformer belongs to the connection' });
    } else {
      groups.push(
        toGroup(record.kind, record.ratings, { index, count: unit.count, phases: record.phases, path }),
      );
    }
  }
  return { groups, problems: [...problems, ...groups.flatMap(readRatingProblems)] };
}

export function totalKw(groups: UnitGroup[]): number {
  return groups.reduce((total, { ratings, count }) => total + ratings.kw * count, 0);
}

export function totalKva(groups: UnitGroup[]): number {
  return groups.reduce((total, { ratings, count }) => total + ratings.kva * count, 0);
}
