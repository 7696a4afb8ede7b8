import { mailFrameHeaders } from '../middleware/security-headers.ts';
import { route } from '../route-definition.ts';
import { getMessageHtml, getMessageView, listMailbox } from '../services/mailbox.ts';

export const mailboxRoutes = [
  route({
    method: 'get',
    path: '/mailbox',
    action: 'mailbox.list',
    handle: ({ deps, context }) => listMailbox(deps, context),
  }),
  route({
    method: 'get',
    path: '/mailbox/:id',
    action: 'mailbox.read',
    handle: ({ deps, params }) => getMessageView(deps, params.id),
  }),
  route({
    method: 'get',
    path: '/mailbox/:id/html',
    action: 'mailbox.read',
    async handle({ deps, params, response }) {
      const html = await getMessageHtml(deps, params.id);
      response.set(mailFrameHeaders).type('html').send(html);
    },
  }),
];
