import { Router, type Request } from 'express';
import {
  DEFAULT_WATCH_HOURS,
  watchAnswer,
  watchChange,
  watchInput,
  watchListAnswer,
  watchListQuery,
  watchParams,
  watchPreviewAnswer,
  watchPreviewInput,
  type WatchAnswer,
} from '../contract/watches.js';
import { invalid } from '../errors.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import type { Actor } from '../policies/actor.js';
import { authorize, authorizeAll, permissions } from '../policies/policy.js';
import { maySetWatches, watchPolicy } from '../policies/watch-policy.js';
import { presentWatch, type WatchRecord } from '../presenters/watch.js';
import { presentWatchedUnit } from '../presenters/watched-unit.js';
import { findWatch, listWatches } from '../queries/find-watches.js';
import { previewWatch } from '../queries/preview-watch.js';
import { changeWatch } from '../services/change-watch.js';
import { endWatch } from '../services/end-watch.js';
import { resolveScope } from '../services/resolve-scope.js';
import { setWatch } from '../services/set-watch.js';

const list = { query: watchListQuery };
const create = { body: watchInput };
const preview = { body: watchPreviewInput };
const one = { params: watchParams };
const change = { params: watchParams, body: watchChange };

/** Watches: requests to be told. */
export function watchesRoutes(context: Context): Router {
  const { db, clock } = context;
  const router = Router();
  const user = requireUser(context);

  const authorized = async (request: Request, id: number, act: 'see' | 'update' | 'delete') => {
    const watch = await findWatch(db, id, clock.now());
    authorize(actorOf(request), watchPolicy, act, watch);
    return watch;
  };
  const answer = async (actor: Actor, id: number): Promise<WatchAnswer> => {
    const watch = await findWatch(db, id, clock.now());
    authorize(actor, watchPolicy, 'see', watch);
    return { data: presentWatch(watch), can: rightsOf(actor, watch) };
  };

  router.get('/watches', user, validate(list), async (request, response) => {
    const actor = actorOf(request);
    const page = await listWatches(db, actor, validated(request, list).query, clock.now());
    const data = page.watches.map((watch) => ({
      ...presentWatch(watch),
      can: rightsOf(actor, watch),
    }));
    response.json({ data, next: page.next });
  });

  router.post('/watches', user, validate(create), async (request, response) => {
    const actor = actorOf(request);
    authorizeAll(actor, maySetWatches);
    const id = await setWatch(context, actor, validated(request, create).body);
    response
      .status(201)
      .location(`/api/watches/${id}`)
      .json(await answer(actor, id));
  });

  router.post('/watches/preview', user, validate(preview), async (request, response) => {
    const actor = actorOf(request);
    authorizeAll(actor, maySetWatches);
    const { kind, includeOnHand, hours, ...body } = validated(request, preview).body;
    const now = clock.now();
    const { scope, faults } = await resolveScope(db, actor, body.scope, now);
    if (faults.length > 0) throw invalid('The watch names what is not for you.', faults);
    const rule = { kind, scope, includeOnHand, hours: hours ?? DEFAULT_WATCH_HOURS[kind] };
    const { first, ...counts } = await previewWatch(db, actor, rule, now);
    response.json({
      data: { ...counts, first: first.map((unit) => presentWatchedUnit(unit, now)) },
    });
  });

  router.get('/watches/:id', user, validate(one), async (request, response) => {
    response.json(await answer(actorOf(request), validated(request, one).params.id));
  });

  router.patch('/watches/:id', user, validate(change), async (request, response) => {
    const { params, body } = validated(request, change);
    const watch = await authorized(request, params.id, 'update');
    await changeWatch(context, watch, body);
    response.json(await answer(actorOf(request), watch.id));
  });

  router.delete('/watches/:id', user, validate(one), async (request, response) => {
    const watch = await authorized(request, validated(request, one).params.id, 'delete');
    await endWatch(context, watch.id);
    response.status(204).end();
  });

  return router;
}

function rightsOf(actor: Actor, watch: WatchRecord) {
  return permissions(actor, watchPolicy, ['update', 'delete'], watch);
}

export const watchesOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/watches',
    summary: 'List the watches that I set or that tell me, newest first',
    query: watchListQuery,
    response: watchListAnswer,
  },
  {
    method: 'post',
    path: '/api/watches',
    summary: 'Ask to be told',
    body: watchInput,
    status: 201,
    response: watchAnswer,
  },
  {
    method: 'post',
    path: '/api/watches/preview',
    summary: 'Say how much a watch would cover and raise now; nothing is kept',
    body: watchPreviewInput,
    response: watchPreviewAnswer,
  },
  {
    method: 'get',
    path: '/api/watches/:id',
    summary: 'Show one watch',
    params: watchParams,
    response: watchAnswer,
  },
  {
    method: 'patch',
    path: '/api/watches/:id',
    summary: 'Change a watch; its kind stays',
    params: watchParams,
    body: watchChange,
    response: watchAnswer,
  },
  {
    method: 'delete',
    path: '/api/watches/:id',
    summary: 'End a watch; its open alerts clear',
    params: watchParams,
  },
];
