import { Submission } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { submitApplication } from '../services/submissions.ts';

export const submissionRoutes = [
  route({
    method: 'post',
    path: '/applications/:id/submission',
    action: 'application.submit',
    body: Submission,
    handle: ({ deps, context, params, body }) => submitApplication(deps, context, params.id, body),
  }),
];
