import type { Context } from '../lib/context.js';
import { modelsOf } from '../models/index.js';

/** Ends a session: its token no longer opens anything. */
export async function endSession({ db, clock }: Context, sessionId: string): Promise<void> {
  const { Session } = modelsOf(db.sequelize);
  await Session.update({ endedAt: clock.now() }, { where: { id: sessionId, endedAt: null } });
}
