import { Type } from '@sinclair/typebox';
import { SaveSection } from '../../shared/schemas/applications.ts';
import { limitArrivals } from '../middleware/rate-limits.ts';
import { route } from '../route-definition.ts';
import { discardDraft, getDraft, saveSection, startApplication } from '../services/drafts.ts';

export const draftRoutes = [
  route({
    method: 'post',
    path: '/applications',
    action: 'applications.start',
    before: () => [limitArrivals()],
    body: Type.Object({}, { additionalProperties: false }),
    status: 201,
    handle: ({ deps, context }) => startApplication(deps, context),
  }),
  route({
    method: 'get',
    path: '/applications/:id/draft',
    action: 'application.write',
    handle: ({ deps, context, params }) => getDraft(deps, context, params.id),
  }),
  route({
    method: 'put',
    path: '/applications/:id/draft/:section',
    action: 'application.write',
    body: SaveSection,
    handle: ({ deps, context, params, body }) => saveSection(deps, context, params.id, params.section, body),
  }),
  route({
    method: 'delete',
    path: '/applications/:id/draft',
    action: 'application.write',
    handle: ({ deps, context, params }) => discardDraft(deps, context, params.id),
  }),
];
