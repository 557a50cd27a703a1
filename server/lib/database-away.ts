import { ConnectionError } from 'sequelize';

/** Codes of connections that could not be had, or broke while they were used. */
const awayCodes = new Set([
  'ECONNREFUSED',
  'ECONNRESET',
  'EPIPE',
  'ENOENT',
  'ETIMEDOUT',
  'ER_GET_CONNECTION_TIMEOUT',
  'ER_CONNECTION_TIMEOUT',
  'ER_SOCKET_UNEXPECTED_CLOSE',
  'ER_SOCKET_CREATION_FAIL',
  'ER_CONNECTION_ALREADY_CLOSED',
  'ER_CMD_CONNECTION_CLOSED',
  'ER_CMD_NOT_EXECUTED_DESTROYED',
  'ER_SOCKET_TIMEOUT',
  'ER_POOL_ALREADY_CLOSED',
  'ER_SERVER_SHUTDOWN',
  'ER_CONNECTION_KILLED',
]);

/**
 * MariaDB's numbers for what it cannot do at the moment, whoever asked: no room, too many
 * connections or transactions, locks held by others, stopping, read only.
 */
const notNow = new Set([1021, 1040, 1053, 1114, 1203, 1205, 1213, 1226, 1290, 1637, 1792, 1836]);

/**
 * True when an error says that the database cannot do anything of this kind at the moment, so that
 * the same request may succeed later.
 */
export function isDatabaseUnable(error: unknown): boolean {
  for (let cause: unknown = error; cause instanceof Error;) {
    const { errno, parent } = cause as Error & { errno?: number; parent?: unknown };
    if (errno !== undefined && notNow.has(errno)) return true;
    cause = parent ?? cause.cause;
  }
  return false;
}

/** True when an error says that the database cannot be reached, not that a statement was wrong. */
export function isDatabaseAway(error: unknown): boolean {
  for (let cause: unknown = error; cause instanceof Error;) {
    if (cause instanceof ConnectionError) return true;
    const { code, sqlState, parent } = cause as Error & {
      code?: string;
      sqlState?: string;
      parent?: unknown;
    };
    // Connection exceptions are class 08 of the SQL standard.
    if (sqlState?.startsWith('08') && code !== undefined) return true;
    if (code !== undefined && awayCodes.has(code) && ('sqlState' in cause || 'sql' in cause)) {
      return true;
    }
    cause = parent ?? cause.cause;
  }
  return false;
}
