import { QueryTypes, type Sequelize, type Transaction } from 'sequelize';

/**
 * Says that sites, read points, antennas, tags, identities or routes change in this transaction.
 * Call it first: it also makes changes of the configuration wait for each other.
 */
export async function bumpConfigVersion(transaction: Transaction): Promise<void> {
  // Sequelize keeps itself on each transaction, but not in its type.
  const { sequelize } = transaction as Transaction & { sequelize: Sequelize };
  await sequelize.query('UPDATE config_state SET version = version + 1 WHERE id = 1', {
    type: QueryTypes.UPDATE,
    transaction,
  });
}
