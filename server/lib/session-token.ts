import jwt from 'jsonwebtoken';
import { z } from 'zod';

const algorithm = 'HS256';
const claims = z.object({ sid: z.uuid(), exp: z.number() });

/** Signs the token that points at a session row. */
export function signSessionToken(secret: string, session: { id: string; expiresAt: Date }): string {
  const exp = Math.floor(session.expiresAt.getTime() / 1_000);
  return jwt.sign({ sid: session.id, exp }, secret, { algorithm, noTimestamp: true });
}

/** The session id of a token that we signed and that has not expired; else null. */
export function readSessionToken(secret: string, token: string, now: Date): string | null {
  try {
    const clockTimestamp = Math.floor(now.getTime() / 1_000);
    const payload = jwt.verify(token, secret, { algorithms: [algorithm], clockTimestamp });
    return claims.parse(payload).sid;
  } catch {
    return null;
  }
}
