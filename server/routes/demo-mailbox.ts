import { Router } from 'express';
import { demoMailListAnswer } from '../contract/alerts.js';
import { mailboxDirectory } from '../config/env.js';
import { notFound } from '../errors.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { onlyInDemo } from '../middleware/only-in-demo.js';
import { requireUser } from '../middleware/require-user.js';
import { validate } from '../middleware/validate.js';
import { presentDemoMail } from '../presenters/demo-mail.js';
import { mailboxPage, mailboxStyle, mailPage } from '../presenters/mailbox-page.js';
import { readKeptMail, readMailbox } from '../smtp-fake/read-mailbox.js';

/** The demo's mailbox as JSON, below /api; outside the demo it does not exist. */
export function demoMailboxRoutes(context: Context): Router {
  const router = Router();
  const guards = [onlyInDemo(context), requireUser(context), validate({})];
  router.get('/demo/mailbox', ...guards, async (_request, response) => {
    const mails = await readMailbox(mailboxDirectory(context.env));
    response.json({ data: mails.map(presentDemoMail), next: null });
  });
  return router;
}

/**
 * The same as pages, at the root and open to everybody on the machine, as a mail program would
 * be; stands before the files of the client. Outside the demo they do not exist.
 */
export function demoMailboxPages(context: Context): Router {
  const router = Router();
  const directory = mailboxDirectory(context.env);
  router.use('/demo', onlyInDemo(context));
  router.get('/demo/mailbox.css', (_request, response) => {
    response.type('css').send(mailboxStyle);
  });
  router.get('/demo/mailbox', async (_request, response) => {
    const mails = await readMailbox(directory);
    response.set('Cache-Control', 'no-store').type('html').send(mailboxPage(mails));
  });
  router.get('/demo/mailbox/:id', async (request, response) => {
    const mail = await readKeptMail(directory, request.params.id);
    if (!mail) throw notFound('There is no such mail.');
    response.set('Cache-Control', 'no-store').type('html').send(mailPage(mail));
  });
  return router;
}

export const demoMailboxOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/demo/mailbox',
    summary: 'List the mail that the demo caught (demo only)',
    response: demoMailListAnswer,
  },
];
