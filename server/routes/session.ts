import { Router } from 'express';
import { unauthenticated } from '../errors.js';
import { sessionSchema, signInSchema } from '../contract/session.js';
import type { Context } from '../lib/context.js';
import type { Operation } from '../lib/openapi/operation.js';
import { sessionCookie } from '../lib/session-cookie.js';
import { SignInLimiter, type SignInLimits } from '../middleware/rate-limit.js';
import { actorOf, requireUser, sessionOf } from '../middleware/require-user.js';
import { validate, validated } from '../middleware/validate.js';
import type { Actor } from '../policies/actor.js';
import { presentSession } from '../presenters/session.js';
import { findActor } from '../queries/find-actor.js';
import { findOrganisationById } from '../queries/find-organisation.js';
import { endSession } from '../services/end-session.js';
import { normaliseEmail, startSession } from '../services/start-session.js';

const signIn = { body: signInSchema };

/** Sign in, who am I, sign out. */
export function sessionRoutes(context: Context, limits?: SignInLimits): Router {
  const router = Router();
  const limiter = new SignInLimiter(limits);
  const answer = async (actor: Actor) => {
    const organisation = await findOrganisationById(context.db, actor.organisationId);
    return { data: presentSession(actor, organisation, context.env.demo) };
  };

  router.post('/session', validate(signIn), async (request, response) => {
    const { body } = validated(request, signIn);
    const email = normaliseEmail(body.email);
    const source = request.ip ?? '';
    await limiter.attempt(email, source);
    const { sessionId, token } = await startSession(context, body);
    await limiter.succeeded(email, source);
    const actor = await findActor(context.db, sessionId, context.clock.now());
    if (!actor) throw unauthenticated();
    response.setHeader('Set-Cookie', sessionCookie(context.env, token));
    response.json(await answer(actor));
  });

  router.get('/session', requireUser(context), validate({}), async (request, response) => {
    response.json(await answer(actorOf(request)));
  });

  router.delete('/session', requireUser(context), validate({}), async (request, response) => {
    await endSession(context, sessionOf(request));
    response.setHeader('Set-Cookie', sessionCookie(context.env, ''));
    response.status(204).end();
  });

  return router;
}

export const sessionOperations: Operation[] = [
  {
    method: 'post',
    path: '/api/session',
    summary: 'Sign in',
    access: 'public',
    body: signInSchema,
    response: sessionSchema,
  },
  {
    method: 'get',
    path: '/api/session',
    summary: 'Say who is signed in and which sections they may open',
    response: sessionSchema,
  },
  { method: 'delete', path: '/api/session', summary: 'Sign out' },
];
