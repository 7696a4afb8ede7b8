import { Decision } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { decide } from '../services/decisions.ts';

export const decisionRoutes = [
  route({
    method: 'post',
    path: '/applications/:id/decision',
    action: 'application.decide',
    body: Decision,
    handle: ({ deps, context, params, body }) => decide(deps, context, params.id, body),
  }),
];
