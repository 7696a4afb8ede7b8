import type { EquipmentKind, EquipmentView } from '../../shared/schemas/equipment.ts';
import type { Database } from '../connection.ts';

/** One version of an equipment record. */
export interface EquipmentVersion extends EquipmentView {
  id: number;
  state: 'draft' | 'released' | 'withdrawn';
}

interface EquipmentRow extends Omit<EquipmentVersion, 'ratings'> {
  ratings: string;
}

function selectEquipment(db: Database) {
  return db('equipment_versions').select<EquipmentRow[]>({
    id: 'id',
    publicId: 'public_id',
    kind: 'kind',
    maker: 'maker',
    model: 'model',
    phases: 'phases',
    ratings: 'ratings',
    certifiedUntil: 'certified_until',
    state: 'state',
  });
}

function toVersion(row: EquipmentRow): EquipmentVersion {
  return { ...row, ratings: JSON.parse(row.ratings) as EquipmentView['ratings'] };
}

/** The newest released version of every record. */
export async function listReleasedEquipment(db: Database, kind?: EquipmentKind): Promise<EquipmentVersion[]> {
  const newest = db('equipment_versions as other')
    .max('other.number')
    .where('other.state', 'released')
    .whereRaw('other.equipment_id = equipment_versions.equipment_id');
  const query = selectEquipment(db).where({ state: 'released' }).where('number', newest);
  if (kind !== undefined) void query.where({ kind });
  const rows = await query.orderBy(['kind', 'maker', 'model']);
  return rows.map(toVersion);
}

export async function listEquipmentVersions(db: Database, publicIds: string[]): Promise<EquipmentVersion[]> {
  if (publicIds.length === 0) return [];
  const rows = await selectEquipment(db).whereIn('public_id', publicIds);
  return rows.map(toVersion);
}

interface NewEquipmentVersion extends EquipmentView {
  /** The record that this is a version of. */
  equipmentId: number;
  number: number;
  sha256: Buffer;
  state: EquipmentVersion['state'];
}

export async function insertEquipmentVersion(trx: Database, version: NewEquipmentVersion): Promise<number> {
  const [id] = await trx('equipment_versions').insert({
    public_id: version.publicId,
    equipment_id: version.equipmentId,
    number: version.number,
    maker: version.maker,
    model: version.model,
    kind: version.kind,
    phases: version.phases,
    ratings: JSON.stringify(version.ratings),
    sha256: version.sha256,
    state: version.state,
    certified_until: version.certifiedUntil,
  });
  return id as number;
}
