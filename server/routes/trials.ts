import { Type } from '@sinclair/typebox';
import { TrialRequest, VariantRequest } from '../../shared/schemas/trials.ts';
import { route } from '../route-definition.ts';
import { getRemedies } from '../services/remedies.ts';
import { getTrialParts, tryOut } from '../services/trials.ts';
import { deleteKeptTrial, keepTrial, listKeptTrials } from '../services/variants.ts';

const VariantKey = Type.Object(
  { variant: Type.String({ minLength: 1, maxLength: 64, errorMessage: 'Name the kept trial' }) },
  { additionalProperties: false },
);

export const trialRoutes = [
  route({
    method: 'get',
    path: '/runs/:id/trial-parts',
    action: 'run.try',
    handle: ({ deps, params }) => getTrialParts(deps, params.id),
  }),
  route({
    method: 'get',
    path: '/runs/:id/remedies',
    action: 'run.try',
    handle: ({ deps, params }) => getRemedies(deps, params.id),
  }),
  route({
    method: 'post',
    path: '/applications/:id/trials',
    action: 'application.try',
    body: TrialRequest,
    handle: ({ deps, params, body }) => tryOut(deps, params.id, body),
  }),
  route({
    method: 'get',
    path: '/applications/:id/variants',
    action: 'application.runs',
    handle: ({ deps, params }) => listKeptTrials(deps, params.id),
  }),
  route({
    method: 'post',
    path: '/applications/:id/variants',
    action: 'application.try',
    body: VariantRequest,
    status: 201,
    handle: ({ deps, context, params, body }) => keepTrial(deps, context, params.id, body),
  }),
  route({
    method: 'delete',
    path: '/applications/:id/variants',
    action: 'application.try',
    query: VariantKey,
    handle: ({ deps, context, params, query }) => deleteKeptTrial(deps, context, params.id, query.variant),
  }),
];
