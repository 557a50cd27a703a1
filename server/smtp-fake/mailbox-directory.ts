import path from 'node:path';

/** Where the demo keeps the mail that it catches. */
export function mailboxDirectory(env: { dataDir: string }): string {
  return path.join(env.dataDir, 'mailbox');
}
