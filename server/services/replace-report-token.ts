import { hashAccessToken, newAccessToken } from '../lib/access-token.js';
import type { Context } from '../lib/context.js';
import { inTransaction } from '../lib/in-transaction.js';
import { modelsOf } from '../models/index.js';

/**
 * Gives an organisation a new token to report with and ends the one it had. The token is told
 * this once: only its SHA-256 is stored.
 */
export async function replaceReportToken(
  { db, clock }: Pick<Context, 'db' | 'clock'>,
  organisationId: number,
): Promise<string> {
  const { Organisation, ReportToken } = modelsOf(db.sequelize);
  const token = newAccessToken();
  const now = clock.now();
  await inTransaction(db.sequelize, async (transaction) => {
    // Two at once wait for each other here, so that one token is left.
    await Organisation.findByPk(organisationId, {
      attributes: ['id'],
      lock: transaction.LOCK.UPDATE,
      transaction,
    });
    await ReportToken.update(
      { revokedAt: now },
      { where: { organisationId, revokedAt: null }, transaction },
    );
    await ReportToken.create(
      { organisationId, tokenHash: hashAccessToken(token), createdAt: now, revokedAt: null },
      { transaction },
    );
  });
  return token;
}
