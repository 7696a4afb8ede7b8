import { Withdrawal } from '../../shared/schemas/applications.ts';
import { route } from '../route-definition.ts';
import { withdraw } from '../services/withdrawals.ts';

export const withdrawalRoutes = [
  route({
    method: 'post',
    path: '/applications/:id/withdrawal',
    action: 'application.withdraw',
    body: Withdrawal,
    handle: ({ deps, context, params, body }) => withdraw(deps, context, params.id, body),
  }),
];
