import { route } from '../route-definition.ts';
import { listPeople } from '../services/people.ts';

export const peopleRoutes = [
  route({ method: 'get', path: '/people', action: 'people.list', handle: ({ deps }) => listPeople(deps) }),
];
