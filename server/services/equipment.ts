import { listReleasedEquipment } from '../../db/repositories/equipment.ts';
import type { EquipmentKind, EquipmentView } from '../../shared/schemas/equipment.ts';
import type { Deps } from '../context.ts';

export async function listEquipment(deps: Deps, kind: EquipmentKind | undefined): Promise<EquipmentView[]> {
  const versions = await listReleasedEquipment(deps.db, kind);
  return versions.map(({ id: _id, state: _state, ...view }) => view);
}
