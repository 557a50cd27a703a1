import type { Context } from '../lib/context.js';
import { replaceReportToken } from '../services/replace-report-token.js';
import { rotateReaderTokens } from './rotate-reader-tokens.js';
import { whoTells } from './who-tells.js';
import { world } from './world.js';

/** What the demo's readers, railroad and clerk show at the doors; the tokens are new. */
export async function demoCredentials(context: Pick<Context, 'db' | 'clock'>) {
  const { railroadId } = await whoTells(context.db);
  return {
    tokens: await rotateReaderTokens(context),
    ...(railroadId === null ? {} : { reportToken: await replaceReportToken(context, railroadId) }),
    clerk: { email: world.tellers.clerk, password: world.password },
  };
}
