import { Router } from 'express';
import {
  rebuildAnswer,
  rebuildListAnswer,
  rebuildListQuery,
  rebuildParams,
  type RebuildView,
} from '../contract/rebuilds.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { requireAdministrator } from '../middleware/require-role.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import type { Actor } from '../policies/actor.js';
import { authorize, permissions } from '../policies/policy.js';
import { rebuildActs, rebuildPolicy } from '../policies/rebuild-policy.js';
import { presentRebuild, type RebuildRecord } from '../presenters/rebuild.js';
import { findRebuild, listRebuilds } from '../queries/list-rebuilds.js';
import { resumeRebuild, stopRebuild } from '../services/stop-rebuild.js';

const list = { query: rebuildListQuery };
const one = { params: rebuildParams };
const turns = { stop: stopRebuild, resume: resumeRebuild };

/** History that is made anew: how far it has come, stopping it and letting it go on. */
export function rebuildsRoutes(context: Context): Router {
  const { db } = context;
  const router = Router();
  const signedIn = requireUser(context);

  router.get(
    '/rebuilds',
    signedIn,
    requireAdministrator,
    validate(list),
    async (request, response) => {
      const { rebuilds, next } = await listRebuilds(db, validated(request, list).query);
      const data = rebuilds.map((record) => present(actorOf(request), record));
      response.json({ data, next });
    },
  );

  for (const act of rebuildActs) {
    router.post(`/rebuilds/:id/${act}`, signedIn, validate(one), async (request, response) => {
      const actor = actorOf(request);
      const { id } = validated(request, one).params;
      const record = await findRebuild(db, id);
      authorize(actor, rebuildPolicy, 'see', record?.rebuild);
      await turns[act](db, id);
      const turned = await findRebuild(db, id);
      response.json({ data: turned && present(actor, turned) });
    });
  }

  return router;
}

function present(actor: Actor, record: RebuildRecord): RebuildView {
  return presentRebuild(record, permissions(actor, rebuildPolicy, rebuildActs, record.rebuild));
}

export const rebuildsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/rebuilds',
    summary: 'List what is made anew of history, newest first, with how far it has come',
    query: rebuildListQuery,
    response: rebuildListAnswer,
  },
  {
    method: 'post',
    path: '/api/rebuilds/:id/stop',
    summary: 'Stop a rebuild after the part in hand; what it has made anew stays',
    params: rebuildParams,
    response: rebuildAnswer,
  },
  {
    method: 'post',
    path: '/api/rebuilds/:id/resume',
    summary: 'Let a stopped rebuild go on where it stopped',
    params: rebuildParams,
    response: rebuildAnswer,
  },
];
