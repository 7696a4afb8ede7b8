import { Type } from '@sinclair/typebox';
import { MailRetry } from '../../shared/schemas/stuck-work.ts';
import { route } from '../route-definition.ts';
import { getStuckWork, retryMail, retryRun } from '../services/stuck-work.ts';

export const stuckWorkRoutes = [
  route({
    method: 'get',
    path: '/stuck-work',
    action: 'stuck-work.read',
    handle: ({ deps }) => getStuckWork(deps),
  }),
  route({
    method: 'post',
    path: '/runs/:id/retry',
    action: 'run.retry',
    body: Type.Object({}, { additionalProperties: false }),
    handle: ({ deps, context, params }) => retryRun(deps, context, params.id),
  }),
  // A mail's key has signs that no path should carry.
  route({
    method: 'post',
    path: '/stuck-work/mail-retries',
    action: 'mail.retry',
    body: MailRetry,
    handle: ({ deps, context, body }) => retryMail(deps, context, body),
  }),
];
