import type { EquipmentKind, EquipmentView } from '../../shared/schemas/equipment.ts';
import { getJson } from './client.ts';

export const listEquipment = (kind?: EquipmentKind) => getJson<EquipmentView[]>('/api/equipment', { kind });
