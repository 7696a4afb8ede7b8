import { Type } from '@sinclair/typebox';
import { stages } from '../../shared/rules/application-life.ts';
import { worklistSorts } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { getApplicationView } from '../services/applications.ts';
import { listApplications } from '../services/worklists.ts';

const oneOf = <T extends string>(values: readonly T[], options = {}) =>
  Type.Union(
    values.map((value) => Type.Literal(value)),
    options,
  );

const WorklistFilter = Type.Object(
  {
    page: Type.Integer({ minimum: 1, maximum: 1_000_000, default: 1 }),
    pageSize: Type.Integer({ minimum: 1, maximum: 100, default: 20 }),
    sort: oneOf(worklistSorts, { default: 'number' }),
    direction: oneOf(['asc', 'desc'] as const, { default: 'desc' }),
    stage: Type.Optional(oneOf(stages)),
    assigned: Type.Optional(oneOf(['mine', 'unassigned'] as const)),
    outside: Type.Optional(Type.Boolean()),
    search: Type.Optional(
      Type.String({ maxLength: 200, errorMessage: 'Search with 200 characters or fewer' }),
    ),
  },
  { additionalProperties: false },
);

export const applicationRoutes = [
  route({
    method: 'get',
    path: '/applications',
    action: 'applications.list',
    query: WorklistFilter,
    handle: ({ deps, context, query }) => listApplications(deps, context, query),
  }),
  route({
    method: 'get',
    path: '/applications/:id',
    action: 'application.read',
    handle: ({ deps, context, params }) => getApplicationView(deps, context, params.id),
  }),
];
