import { execFileSync } from 'node:child_process';
import { once } from 'node:events';
import { readFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import { expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { createProjector } from '../../server/projections/projector.js';
import { replaceReaderToken } from '../../server/services/replace-reader-token.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildAntenna,
  buildPerson,
  buildReadPoint,
  buildSite,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();
const readme = readFileSync(path.resolve(import.meta.dirname, '../../README.md'), 'utf8');

/** The one command of the block that the README marks as tested. */
function testedLine(name: string): string {
  const [, line] =
    new RegExp(`<!-- tested: ${name} -->\\s+\`\`\`sh\\n(curl .+)\\n\`\`\``).exec(readme) ?? [];
  if (line === undefined) throw new Error(`The README has no tested line to ${name}.`);
  return line;
}

/** What a shell would hand to curl, which need not be installed. */
function argumentsOf(line: string, variables: Record<string, string>): string[] {
  const script = `curl() { printf '%s\\0' "$@"; }\n${line}`;
  const env = { PATH: '/usr/bin:/bin', ...variables };
  const text = execFileSync('bash', ['--norc', '-ec', script], {
    encoding: 'utf8',
    env,
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  return text.split('\0').slice(0, -1);
}

/** Sends what curl would send for `-sS -X method address -H header… -d body`. */
function send([quiet, x, method, address, ...rest]: string[]): Promise<Response> {
  expect([quiet, x]).toEqual(['-sS', '-X']);
  const values = (option: string) =>
    rest.flatMap((word, at) => (at % 2 === 1 && rest[at - 1] === option ? [word] : []));
  const headers = values('-H').map((text) => text.split(': ') as [string, string]);
  expect(rest).toHaveLength(2 * (headers.length + 1));
  return fetch(String(address), { method: String(method), headers, body: values('-d')[0] ?? null });
}

test('the line that connects a reader brings a read in, and its car is seen there', async () => {
  const context = buildContext(db);
  const app = createApp(context, { clientDirectory: null });
  const site = await buildSite(db, { code: 'ALDER' });
  await buildAntenna(db, { readPoint: await buildReadPoint(db, { site }), number: 1 });
  const server = createServer(app).listen(0, '127.0.0.1');
  await once(server, 'listening');
  try {
    const { port } = server.address() as AddressInfo;
    const answer = await send(
      argumentsOf(testedLine('connect a reader'), {
        ADDRESS: `http://127.0.0.1:${port}`,
        TOKEN: await replaceReaderToken(context, site.id),
      }),
    );
    expect(await answer.json()).toEqual({
      accepted: 1,
      duplicates: 0,
      held: 0,
      rejected: 0,
      problems: [],
    });
  } finally {
    server.closeAllConnections();
    server.close();
  }
  await createProjector(context).drain();
  const administrator = await signIn(app, await buildPerson(db));
  const { body } = await administrator.get('/api/equipment/QTKX40127').expect(200);
  expect(body.data.lastSeen.site.code).toBe('ALDER');
});
