import { stringifySetCookie } from 'cookie';
import type { Env } from '../config/env.js';

/** A session ends this long after the sign-in, whatever happens. */
export const SESSION_HOURS = 12;

const isHttps = (env: Env) => env.publicUrl.startsWith('https:');

/** Browsers keep cookies per host, not per port: two instances on one machine need two names. */
export function sessionCookieName(env: Env): string {
  return isHttps(env) ? '__Host-fishplate' : `fishplate-${env.port}`;
}

/** The Set-Cookie text that carries the token; an empty token takes the cookie away. */
export function sessionCookie(env: Env, token: string): string {
  return stringifySetCookie({
    name: sessionCookieName(env),
    value: token,
    httpOnly: true,
    sameSite: 'strict',
    secure: isHttps(env),
    path: '/',
    maxAge: token === '' ? 0 : SESSION_HOURS * 3_600,
  });
}
