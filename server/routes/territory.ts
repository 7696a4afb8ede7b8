import { Type } from '@sinclair/typebox';
import { Pin } from '../../shared/schemas/territory.ts';
import { limitSnaps } from '../middleware/rate-limits.ts';
import { route } from '../route-definition.ts';
import { getMapLayers, searchAddresses, snapPin } from '../services/territory.ts';

const AddressSearch = Type.Object(
  {
    search: Type.String({
      default: '',
      maxLength: 200,
      errorMessage: 'Search with 200 characters or fewer',
    }),
  },
  { additionalProperties: false },
);

export const territoryRoutes = [
  route({
    method: 'get',
    path: '/territory/layers',
    action: 'territory.read',
    handle: ({ deps }) => getMapLayers(deps),
  }),
  route({
    method: 'get',
    path: '/territory/addresses',
    action: 'territory.read',
    query: AddressSearch,
    handle: ({ deps, query }) => searchAddresses(deps, query.search),
  }),
  route({
    method: 'post',
    path: '/territory/snap',
    action: 'territory.snap',
    before: () => [limitSnaps()],
    body: Pin,
    handle: ({ deps, context, body }) => snapPin(deps, context, body),
  }),
];
