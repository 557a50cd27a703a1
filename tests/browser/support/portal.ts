import { once } from 'node:events';
import { mkdtemp, rm } from 'node:fs/promises';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import os from 'node:os';
import path from 'node:path';
import { createApp } from '../../../server/app.js';
import { evaluateWatches } from '../../../server/jobs/evaluate-watches.js';
import { sendOutbox } from '../../../server/jobs/send-outbox.js';
import type { Context } from '../../../server/lib/context.js';
import type { Database } from '../../../server/lib/database.js';
import { createProjector } from '../../../server/projections/projector.js';
import { demoCases } from '../../../server/simulator/demo-cases.js';
import { readMailbox, type KeptMail } from '../../../server/smtp-fake/read-mailbox.js';
import { startSmtpFake } from '../../../server/smtp-fake/start-smtp-fake.js';
import { buildClock, buildContext, type TestClock } from '../../support/context.js';

/** The whole server on a port of its own, with its projector, its mail, and a clock to be moved. */
export interface Portal {
  /** `http://127.0.0.1:…`, no slash at its end. */
  address: string;
  context: Context;
  /** The server's clock. The browser keeps the machine's time. */
  clock: TestClock;
  /** Moves the clock on and lets the timed jobs run once, as they would have by then. */
  later(hours: number): Promise<void>;
  mails(): Promise<KeptMail[]>;
  close(): Promise<void>;
}

/** Starts it with its clock at `hoursAgo` before the present, so that the tests end in the present. */
export async function startPortal(db: Database, hoursAgo: number): Promise<Portal> {
  const parent = await mkdtemp(path.join(os.tmpdir(), 'fishplate-portal-'));
  const mail = await startSmtpFake({ port: 0, directory: path.join(parent, 'mailbox') });
  const server = createServer();
  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  const { port } = server.address() as AddressInfo;
  const address = `http://127.0.0.1:${port}`;
  const clock = buildClock();
  clock.advance(-hoursAgo * 3_600_000);
  const env = { smtpUrl: mail.url, publicUrl: address, port };
  const context = buildContext(db, { env, clock });
  const projector = createProjector(context);
  const projectorLagMs = () => projector.lagMs();
  server.on('request', createApp(context, { projectorLagMs, demoCases }));
  projector.start();
  return {
    address,
    context,
    clock,
    async later(hours) {
      clock.advance(hours * 3_600_000);
      await evaluateWatches(context);
      await sendOutbox(context);
    },
    mails: () => readMailbox(mail.directory),
    async close() {
      const closed = once(server, 'close');
      server.close();
      server.closeAllConnections();
      await closed;
      await projector.stop();
      await mail.close();
      await rm(parent, { recursive: true });
    },
  };
}
