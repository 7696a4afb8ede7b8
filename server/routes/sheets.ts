import { Type } from '@sinclair/typebox';
import { route } from '../route-definition.ts';
import { getSheet, printSheet } from '../services/sheets.ts';

const Paper = Type.Object(
  { paper: Type.Union([Type.Literal('a4'), Type.Literal('letter')], { default: 'letter' }) },
  { additionalProperties: false },
);

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
    query: Paper,
    handle: async ({ deps, params, query, response }) => {
      const { name, bytes } = await printSheet(deps, params.id, query.paper);
      response
        .type('application/pdf')
        .set('content-disposition', `attachment; filename="${name}"`)
        .set('cache-control', 'private, no-store')
        .send(Buffer.from(bytes));
    },
  }),
];
