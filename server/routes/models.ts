import { route } from '../route-definition.ts';
import { getModelDrawing, listModels } from '../services/models.ts';

export const modelRoutes = [
  route({ method: 'get', path: '/models', action: 'models.read', handle: ({ deps }) => listModels(deps) }),
  route({
    method: 'get',
    path: '/models/:code/drawing',
    action: 'models.read',
    handle: ({ deps, params }) => getModelDrawing(deps, params.code),
  }),
];
