import { route } from '../route-definition.ts';
import { checkHealth } from '../services/health.ts';

export const healthRoutes = [
  route({ method: 'get', path: '/health', action: 'health.read', handle: ({ deps }) => checkHealth(deps) }),
];
