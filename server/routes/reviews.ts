import { Completeness, Deficiency, ReviewerChange } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { askForMissing, changeReviewer, confirmComplete } from '../services/reviews.ts';

export const reviewRoutes = [
  route({
    method: 'put',
    path: '/applications/:id/reviewer',
    action: 'application.assign',
    body: ReviewerChange,
    handle: ({ deps, context, params, body }) => changeReviewer(deps, context, params.id, body),
  }),
  route({
    method: 'post',
    path: '/applications/:id/completeness',
    action: 'application.review',
    body: Completeness,
    handle: ({ deps, context, params, body }) => confirmComplete(deps, context, params.id, body),
  }),
  route({
    method: 'post',
    path: '/applications/:id/deficiency',
    action: 'application.review',
    body: Deficiency,
    handle: ({ deps, context, params, body }) => askForMissing(deps, context, params.id, body),
  }),
];
