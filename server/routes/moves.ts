import { Move } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { recordMove } from '../services/moves.ts';

export const moveRoutes = [
  route({
    method: 'post',
    path: '/applications/:id/moves',
    action: 'application.review',
    body: Move,
    handle: ({ deps, context, params, body }) => recordMove(deps, context, params.id, body),
  }),
];
