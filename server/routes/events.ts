import { createSession } from 'better-sse';
import { Router } from 'express';
import { HEARTBEAT_MS } from '../contract/events.js';
import { tooMany } from '../errors.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { actorOf, requireUser, sessionOf } from '../middleware/require-user.js';
import { validate } from '../middleware/validate.js';
import { LiveFeed, type FeedTimes } from '../services/live-feed.js';

/** Streams one person may have open: some windows on some devices. */
const MOST_STREAMS = 20;

/** Server-sent events: what changed, of what the person may see. */
export function eventsRoutes(context: Context, times?: FeedTimes): Router {
  const router = Router();
  const feed = new LiveFeed(context, times);

  router.get('/events', requireUser(context), validate({}), async (request, response) => {
    const actor = actorOf(request);
    if (feed.countOf(actor.personId) >= MOST_STREAMS) {
      throw tooMany('Too many windows of yours listen at once. Close some of them.', 30);
    }
    const session = await createSession(request, response, { keepAlive: HEARTBEAT_MS });
    const leave = feed.join(
      {
        actor,
        sessionId: sessionOf(request),
        send: (name, data, id) => {
          if (session.isConnected) session.push(data, name, id);
        },
        close: () => response.end(),
      },
      request.get('Last-Event-ID'),
    );
    if (session.isConnected) session.on('disconnected', leave);
    else leave();
  });

  return router;
}

export const eventsOperations: Operation[] = [
  {
    method: 'get',
    path: '/api/events',
    summary: 'Listen to what changes, of what I may see (server-sent events)',
    responseType: 'text/event-stream',
  },
];
