import { PreApplicationRequest } from '../../shared/schemas/pre-application-reports.ts';
import { limitSnaps } from '../middleware/rate-limits.ts';
import { route } from '../route-definition.ts';
import { PaperQuery, sendPdf } from '../send-pdf.ts';
import {
  getPreApplicationReport,
  listReports,
  printPreApplicationReport,
  requestPreApplicationReport,
} from '../services/pre-application-reports.ts';

export const preApplicationReportRoutes = [
  route({
    method: 'get',
    path: '/pre-application-reports',
    action: 'reports.list',
    handle: ({ deps, context }) => listReports(deps, context),
  }),
  route({
    method: 'post',
    path: '/pre-application-reports',
    action: 'reports.request',
    // Each answer tells of a place on the network.
    before: () => [limitSnaps()],
    body: PreApplicationRequest,
    status: 201,
    handle: ({ deps, context, body }) => requestPreApplicationReport(deps, context, body),
  }),
  route({
    method: 'get',
    path: '/pre-application-reports/:id',
    action: 'report.read',
    handle: ({ deps, params }) => getPreApplicationReport(deps, params.id),
  }),
  route({
    method: 'get',
    path: '/pre-application-reports/:id/pdf',
    action: 'report.read',
    query: PaperQuery,
    handle: async ({ deps, params, query, response }) =>
      sendPdf(response, await printPreApplicationReport(deps, params.id, query.paper)),
  }),
];
