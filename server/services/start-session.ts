import { Op } from 'sequelize';
import { v4 as uuid } from 'uuid';
import { unauthenticated } from '../errors.js';
import type { Context } from '../lib/context.js';
import { isPassword } from '../lib/passwords.js';
import { SESSION_HOURS } from '../lib/session-cookie.js';
import { signSessionToken } from '../lib/session-token.js';
import { modelsOf } from '../models/index.js';

/**
 * Signs a person in: a session row, and the token that points at it; expired rows go. 401 in the same words,
 * after the same work, whether address or password is wrong.
 */
export async function startSession(
  { db, env, clock }: Context,
  { email, password }: { email: string; password: string },
): Promise<{ sessionId: string; token: string }> {
  const { Person, Session } = modelsOf(db.sequelize);
  const person = await Person.findOne({
    where: { email: normaliseEmail(email) },
    attributes: ['id', 'passwordHash'],
  });
  if (!(await isPassword(password, person?.passwordHash ?? null)) || !person) {
    throw unauthenticated('Address or password is not right.');
  }
  const createdAt = clock.now();
  await Session.destroy({ where: { personId: person.id, expiresAt: { [Op.lte]: createdAt } } });
  const expiresAt = new Date(createdAt.getTime() + SESSION_HOURS * 3_600_000);
  const session = { id: uuid(), personId: person.id, createdAt, expiresAt, endedAt: null };
  await Session.create(session);
  return { sessionId: session.id, token: signSessionToken(env.sessionSecret, session) };
}

/** Mail addresses are stored and compared in lower case. */
export const normaliseEmail = (email: string) => email.trim().toLowerCase();
