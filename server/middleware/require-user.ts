import { parseCookie } from 'cookie';
import type { Request, RequestHandler } from 'express';
import { unauthenticated } from '../errors.js';
import type { Context } from '../lib/context.js';
import { sessionCookieName } from '../lib/session-cookie.js';
import type { Actor } from '../policies/actor.js';
import { findActor } from '../queries/find-actor.js';
import { readSessionToken } from '../lib/session-token.js';
import { asGuard } from './guard.js';
import { isBearer } from './same-origin.js';

interface SignedIn {
  actor: Actor;
  sessionId: string;
}

const signedIn = new WeakMap<Request, SignedIn>();

/** Lets only signed-in people pass; the session row is looked up anew on every request. */
export function requireUser(context: Context): RequestHandler {
  return asGuard(async (request, _response, next) => {
    const sessionId = sessionIdOf(context, request);
    const actor = sessionId && (await findActor(context.db, sessionId, context.clock.now()));
    if (!sessionId || !actor) throw unauthenticated();
    signedIn.set(request, { actor, sessionId });
    next();
  });
}

/** Who makes this request; throws where no `requireUser` stands before it. */
export function actorOf(request: Request): Actor {
  return signedInOf(request).actor;
}

/** The session that this request came with. */
export function sessionOf(request: Request): string {
  return signedInOf(request).sessionId;
}

function signedInOf(request: Request): SignedIn {
  const found = signedIn.get(request);
  if (!found) throw new Error('This route asks who acts, but requireUser() does not guard it.');
  return found;
}

/** A request with a Bearer token is not the cookie's, even when the browser sends both. */
function sessionIdOf({ env, clock }: Context, request: Request): string | null {
  if (isBearer(request)) return null;
  const token = parseCookie(request.headers.cookie ?? '')[sessionCookieName(env)];
  return token ? readSessionToken(env.sessionSecret, token, clock.now()) : null;
}
