import { Router } from 'express';
import {
  alertAnswer,
  alertListAnswer,
  alertListQuery,
  alertParams,
  type AlertView,
} from '../contract/alerts.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import type { Actor } from '../policies/actor.js';
import { alertPolicy } from '../policies/alert-policy.js';
import { authorize } from '../policies/policy.js';
import { presentAlert, type AlertRecord } from '../presenters/alert.js';
import { findAlert, listAlerts } from '../queries/find-alerts.js';
import { acknowledgeAlert } from '../services/acknowledge-alert.js';

const list = { query: alertListQuery };
const one = { params: alertParams };

/** Alerts: what watches have noticed. */
export function alertsRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();
  const user = requireUser(context);

  router.get('/alerts', user, validate(list), async (request, response) => {
    const actor = actorOf(request);
    const page = await listAlerts(db, actor, validated(request, list).query, clock.now());
    const data = page.alerts.map((alert) => present(actor, alert));
    response.json({ data, next: page.next, count: page.count });
  });

  router.post('/alerts/:id/acknowledge', user, validate(one), async (request, response) => {
    const actor = actorOf(request);
    const { id } = validated(request, one).params;
    const alert = await findAlert(db, actor, id, clock.now());
    authorize(actor, alertPolicy, 'acknowledge', alert);
    await acknowledgeAlert(context, actor, alert);
    const taken = await findAlert(db, actor, id, clock.now());
    response.json({ data: present(actor, taken ?? alert) });
  });

  return router;
}

function present(actor: Actor, alert: AlertRecord): AlertView {
  return presentAlert(alert, alertPolicy.acknowledge(actor, alert));
}

export const alertsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/alerts',
    summary: 'List the alerts of watches that are mine or tell me, latest first',
    query: alertListQuery,
    response: alertListAnswer,
  },
  {
    method: 'post',
    path: '/api/alerts/:id/acknowledge',
    summary: 'Take an alert: it stays until it clears, and no more mail goes out about it',
    params: alertParams,
    response: alertAnswer,
  },
];
