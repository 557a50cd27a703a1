import { hashAccessToken, newAccessToken } from '../lib/access-token.js';
import type { Context } from '../lib/context.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';

/**
 * Gives a site a new reader token and ends the one it had. The token is told this once: only
 * its SHA-256 is stored.
 */
export async function replaceReaderToken(
  { db, clock }: Pick<Context, 'db' | 'clock'>,
  siteId: number,
): Promise<string> {
  const { ReaderToken, Site } = modelsOf(db.sequelize);
  const token = newAccessToken();
  const tokenHash = hashAccessToken(token);
  const now = clock.now();
  await inTransaction(db.sequelize, async (transaction) => {
    // Two at once wait for each other here, so that one token is left.
    await Site.findByPk(siteId, { attributes: ['id'], lock: transaction.LOCK.UPDATE, transaction });
    await ReaderToken.update(
      { revokedAt: now },
      { where: { siteId, revokedAt: null }, transaction },
    );
    await ReaderToken.create(
      { siteId, tokenHash, createdAt: now, revokedAt: null },
      { transaction },
    );
  });
  return token;
}
