import { Type } from '@sinclair/typebox';
import { equipmentKinds } from '../../shared/schemas/equipment.ts';
import { route } from '../route-definition.ts';
import { listEquipment } from '../services/equipment.ts';

const EquipmentFilter = Type.Object(
  { kind: Type.Optional(Type.Union(equipmentKinds.map((kind) => Type.Literal(kind)))) },
  { additionalProperties: false },
);

export const equipmentRoutes = [
  route({
    method: 'get',
    path: '/equipment',
    action: 'equipment.list',
    query: EquipmentFilter,
    handle: ({ deps, query }) => listEquipment(deps, query.kind),
  }),
];
