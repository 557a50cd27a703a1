import type { PoolConnection } from 'mariadb';
import type { Network } from '../domain/movements/configuration.js';
import { passOfRow, type Changes } from './changes.js';
import { neighboursOf } from './neighbours.js';

/**
 * Notes what the changed passages bear on elsewhere: the passes before and after them in their
 * units' histories have lost or won a witness of their direction, and those after them one of how
 * their cars left.
 */
export async function lookAround(
  connection: PoolConnection,
  network: Network,
  changes: Changes,
): Promise<void> {
  const found = await neighboursOf(connection, network, changes.passages);
  for (const { before, after } of found) {
    for (const row of [before, after]) {
      const key = row && passOfRow(row);
      if (!key) continue;
      changes.vote(key);
      if (row === after) changes.pass(key);
    }
  }
}
