import { Router } from 'express';
import { mailListAnswer, mailListQuery } from '../contract/alerts.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import { maySeeMail } from '../policies/mail-policy.js';
import { authorizeAll } from '../policies/policy.js';
import { presentMail } from '../presenters/mail.js';
import { listMail } from '../queries/list-mail.js';

const list = { query: mailListQuery };

/** What went out by mail, what waits, and every try. */
export function mailRoutes(context: Context): Router {
  const router = Router();
  router.get('/mail', requireUser(context), validate(list), async (request, response) => {
    authorizeAll(actorOf(request), maySeeMail);
    const { mails, next } = await listMail(context.db, validated(request, list).query);
    response.json({ data: mails.map(presentMail), next });
  });
  return router;
}

export const mailOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/mail',
    summary: 'List mail that went out or waits, newest first, with every try (administrator)',
    query: mailListQuery,
    response: mailListAnswer,
  },
];
