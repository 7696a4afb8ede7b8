import { route } from '../route-definition.ts';
import { listApplicationAudit } from '../services/audit.ts';

export const auditRoutes = [
  route({
    method: 'get',
    path: '/applications/:id/audit',
    action: 'application.audit',
    handle: ({ deps, params }) => listApplicationAudit(deps, params.id),
  }),
];
