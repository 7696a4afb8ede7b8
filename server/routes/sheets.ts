import { route } from '../route-definition.ts';
import { PaperQuery, sendPdf } from '../send-pdf.ts';
import { getSheet, printSheet } from '../services/sheets.ts';

export const sheetRoutes = [
  route({
    method: 'get',
    path: '/runs/:id/sheet',
    action: 'run.download',
    handle: ({ deps, params }) => getSheet(deps, params.id),
  }),
  route({
    method: 'get',
    path: '/runs/:id/sheet.pdf',
    action: 'run.download',
    query: PaperQuery,
    handle: async ({ deps, params, query, response }) =>
      sendPdf(response, await printSheet(deps, params.id, query.paper)),
  }),
];
