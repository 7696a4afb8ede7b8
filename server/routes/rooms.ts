import { Type } from '@sinclair/typebox';
import { route } from '../route-definition.ts';
import { askForRoom, findRoomView } from '../services/rooms.ts';

export const roomRoutes = [
  route({
    method: 'get',
    path: '/models/:code/room',
    action: 'models.read',
    handle: async ({ deps, context, params }) => ({ room: await findRoomView(deps, context, params.code) }),
  }),
  route({
    method: 'post',
    path: '/models/:code/room',
    action: 'rooms.ask',
    body: Type.Object({}, { additionalProperties: false }),
    status: 202,
    handle: ({ deps, context, params }) => askForRoom(deps, context, params.code),
  }),
];
