import type { CompleteAnswers, ConnectionAnswers, Neutral as NeutralAnswer } from '../schemas/answers.ts';
import type { GeneratorKind, TransformerNameplate } from '../schemas/equipment.ts';
import type { Inverter, Machine, Neutral, Node, Project, Transformer } from '../schemas/study.ts';
import type { Listing } from '../schemas/study-utility.ts';
import {
  isMachineGroup,
  readUnitGroups,
  totalKw,
  type EquipmentRecords,
  type InverterGroup,
  type MachineGroup,
  type UnitGroup,
} from './project-units.ts';

/** The feeder's node that the project connects to. */
export interface PointOfInterconnection {
  node: string;
  kv: number;
  phases: string;
}

export interface ElectricalAnswers extends Pick<CompleteAnswers, 'equipment' | 'connection'> {
  records: EquipmentRecords;
}

export interface ElectricalProject {
  project: Project;
  sizeKw: number;
  exportKw: number;
  /** Of the units that make up most of it. */
  kind: GeneratorKind;
}

/** The ratings of the chosen transformer; undefined where there is none, or where the record is gone. */
export function findTransformerRatings(
  connection: ConnectionAnswers,
  records: EquipmentRecords,
): TransformerNameplate | undefined {
  const rating = connection.transformer?.rating;
  if (rating === undefined) return undefined;
  if (rating.source === 'nameplate') return rating.nameplate;
  const record = records.get(rating.equipmentId);
  return record?.kind === 'transformer' ? (record.ratings as TransformerNameplate) : undefined;
}

/** `sharedBy` neutral impedances in parallel. No impedance at all is a solid connection. */
function toNeutral(answer: NeutralAnswer, sharedBy = 1): Neutral {
  if (answer.kind !== 'impedance') return answer.kind;
  if (answer.rOhm === 0 && answer.xOhm === 0) return 'solid';
  return { r: answer.rOhm / sharedBy, x: answer.xOhm / sharedBy };
}

/** The letter of a winding: capitals are the utility side (`from`), small letters the site side (`to`). */
function hasNeutral(windings: string, side: 'utility' | 'site'): boolean {
  return side === 'utility' ? windings.startsWith('YN') : windings.includes('yn');
}

function toTransformer(
  { windings, utilityNeutral, siteNeutral }: NonNullable<ConnectionAnswers['transformer']>,
  ratings: TransformerNameplate,
  poiNode: string,
): Transformer {
  return {
    id: 'site-transformer',
    from: poiNode,
    to: 'site-lv',
    kva: ratings.kva,
    connection: windings,
    impedancePercent: ratings.impedancePercent,
    xr: ratings.xr,
    ...(ratings.zeroImpedancePercent !== undefined && { zeroImpedancePercent: ratings.zeroImpedancePercent }),
    ...(hasNeutral(windings, 'utility') && { neutralFrom: toNeutral(utilityNeutral) }),
    ...(hasNeutral(windings, 'site') && { neutralTo: toNeutral(siteNeutral) }),
  };
}

interface Place {
  node: string;
  kv: number;
  phases: string;
}

/**
 * N equal machines at one node are exactly one of N × kVA: N impedances z in parallel are z / N, and per unit on
 * N × kVA that is the same number as before. The N impedances in their neutrals are in parallel too: ohms / N.
 * Reactances are per unit on the machine's own kV; at a node of another kV they change with the square (z = x·kV²/MVA).
 */
function toMachine(group: MachineGroup, id: string, place: Place, neutral: NeutralAnswer): Machine {
  const { ratings, count } = group;
  const scale = (ratings.kv / place.kv) ** 2;
  const base = {
    id,
    node: place.node,
    kva: ratings.kva * count,
    rPu: ratings.rPu * scale,
    // Of an induction machine this is the locked-rotor reactance, and no neutral is brought out.
    xSubtransientPu: ratings.xSubtransientPu * scale,
    x2Pu: ratings.x2Pu * scale,
  };
  if (group.kind === 'induction-machine') return { ...base, kind: 'induction' };
  return { ...base, kind: 'synchronous', x0Pu: ratings.x0Pu * scale, neutral: toNeutral(neutral, count) };
}

/** A unit that is listed was tested to stop feeding an island; what its sheet does not say stays unsaid. */
function toListing(ratings: InverterGroup['ratings']): Listing {
  const { listed, category, settingsProfile, trdPercent, loadRejectionPercent } = ratings;
  return {
    ...(listed && { standard: 'IEEE 1547', antiIslanding: true }),
    ...(category !== undefined && { category }),
    ...(settingsProfile !== undefined && { profile: settingsProfile }),
    ...(trdPercent !== undefined && { trdPercent }),
    ...(loadRejectionPercent !== undefined && { loadRejectionPercent }),
  };
}

/**
 * N equal inverters are one of N × kVA, since their currents add. The current is a multiple of the rated one at the
 * unit's own kV; at a node of another kV the same amperes are another multiple. A one-phase unit stands behind the
 * utility's service transformer, which is left out: its current is taken at the node by its kVA.
 */
function toInverter({ kind, ratings, count }: InverterGroup, id: string, place: Place): Inverter {
  const scale = place.phases.length === 3 ? place.kv / ratings.kv : 1;
  return {
    id,
    node: place.node,
    phases: place.phases,
    kva: ratings.kva * count,
    ...(place.phases.length === 1 && { ratedKv: ratings.kv }),
    faultCurrentPu: ratings.faultCurrentPu * scale,
    ...(kind === 'battery-inverter' && { storage: true }),
    energy: kind === 'battery-inverter' ? 'storage' : 'photovoltaic',
    listed: ratings.listed,
    listing: toListing(ratings),
  };
}

/** What the agreement lets out, shared among the units by size; nothing is said where nothing limits it. */
function shareExport(group: UnitGroup, sizeKw: number, exportKw: number): { exportKw?: number } {
  return exportKw < sizeKw ? { exportKw: (exportKw * group.ratings.kw * group.count) / sizeKw } : {};
}

function findMainKind(groups: UnitGroup[]): GeneratorKind {
  const kwOf = new Map<GeneratorKind, number>();
  for (const { kind, ratings, count } of groups) kwOf.set(kind, (kwOf.get(kind) ?? 0) + ratings.kw * count);
  const [main] = [...kwOf].sort((one, other) => other[1] - one[1]);
  if (main === undefined) throw new Error('A project: got no generating unit, expected at least one');
  return main[0];
}

function findPlace(
  connection: ConnectionAnswers,
  site: Node | undefined,
  poi: PointOfInterconnection,
): Place {
  if (site !== undefined) return { node: site.id, kv: site.kv, phases: 'ABC' };
  // A one-phase project takes the first phase that the node has.
  return { ...poi, phases: connection.phases === 'one' ? poi.phases.slice(0, 1) : 'ABC' };
}

/** The project as the study file has it, from answers in which project-checks.ts found nothing wrong. */
export function composeProject(
  id: string,
  { equipment, connection, records }: ElectricalAnswers,
  poi: PointOfInterconnection,
): ElectricalProject {
  const { groups } = readUnitGroups(equipment, records);
  const ratings = findTransformerRatings(connection, records);
  const site: Node | undefined = ratings && { id: 'site-lv', kv: ratings.kvLow, phases: 'ABC' };
  const place = findPlace(connection, site, poi);
  const sizeKw = totalKw(groups);
  const exportKw = Math.min(equipment.exportKw ?? sizeKw, sizeKw);
  const idOf = (group: UnitGroup) => `unit-${group.index + 1}`;
  const neutral = connection.machineNeutral ?? { kind: 'ungrounded' };
  const machines = groups.filter(isMachineGroup).map((group) => ({
    ...toMachine(group, idOf(group), place, neutral),
    ...shareExport(group, sizeKw, exportKw),
  }));
  const inverters = groups
    .filter((group) => !isMachineGroup(group))
    .map((group) => ({ ...toInverter(group, idOf(group), place), ...shareExport(group, sizeKw, exportKw) }));
  const project: Project = {
    id,
    node: poi.node,
    ...(connection.panelInterruptingKa !== undefined && {
      panelInterruptingKa: connection.panelInterruptingKa,
    }),
    ...(site && { nodes: [site] }),
    ...(ratings &&
      connection.transformer && { transformers: [toTransformer(connection.transformer, ratings, poi.node)] }),
    ...(machines.length > 0 && { machines }),
    ...(inverters.length > 0 && { inverters }),
  };
  return { project, sizeKw, exportKw, kind: findMainKind(groups) };
}
