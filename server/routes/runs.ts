import { Type } from '@sinclair/typebox';
import type { Response } from 'express';
import { Waiver, WaiverAgreement } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { getRunBytes, getRunView, listRuns, screenAgain, type StoredBytes } from '../services/runs.ts';
import { agreeToSettingAside, takeBackWaiver, waiveFinding } from '../services/waivers.ts';

const FindingKey = Type.Object(
  {
    question: Type.String({ minLength: 1, maxLength: 80, errorMessage: 'Name the question' }),
    element: Type.String({ maxLength: 200, default: '' }),
  },
  { additionalProperties: false },
);

const Nothing = Type.Object({}, { additionalProperties: false });

/** For saving, never for showing: the bytes must stay those that were hashed. */
function sendAttachment(response: Response, { name, bytes }: StoredBytes): void {
  response
    .set('content-type', 'application/json')
    .set('content-disposition', `attachment; filename="${name}"`)
    .set('x-content-type-options', 'nosniff')
    .set('content-security-policy', "default-src 'none'; sandbox")
    .set('cache-control', 'private, no-store, no-transform')
    .send(bytes);
}

export const runRoutes = [
  route({
    method: 'post',
    path: '/applications/:id/runs',
    action: 'application.screen',
    body: Nothing,
    status: 202,
    handle: ({ deps, context, params }) => screenAgain(deps, context, params.id),
  }),
  route({
    method: 'get',
    path: '/applications/:id/runs',
    action: 'application.runs',
    handle: ({ deps, context, params }) => listRuns(deps, context, params.id),
  }),
  route({
    method: 'get',
    path: '/runs/:id',
    action: 'run.read',
    handle: ({ deps, context, params }) => getRunView(deps, context, params.id),
  }),
  route({
    method: 'put',
    path: '/runs/:id/waivers',
    action: 'run.waive',
    body: Waiver,
    handle: ({ deps, context, params, body }) => waiveFinding(deps, context, params.id, body),
  }),
  route({
    method: 'put',
    path: '/runs/:id/waivers/agreement',
    action: 'run.waive',
    body: WaiverAgreement,
    handle: ({ deps, context, params, body }) => agreeToSettingAside(deps, context, params.id, body),
  }),
  route({
    method: 'delete',
    path: '/runs/:id/waivers',
    action: 'run.waive',
    query: FindingKey,
    handle: ({ deps, context, params, query }) => takeBackWaiver(deps, context, params.id, query),
  }),
  route({
    method: 'get',
    path: '/runs/:id/study',
    action: 'run.download',
    handle: async ({ deps, context, params, response }) =>
      sendAttachment(response, await getRunBytes(deps, context, params.id, 'study')),
  }),
  route({
    method: 'get',
    path: '/runs/:id/result',
    action: 'run.download',
    handle: async ({ deps, context, params, response }) =>
      sendAttachment(response, await getRunBytes(deps, context, params.id, 'result')),
  }),
];
