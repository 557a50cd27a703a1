import { expect, it } from 'vitest';
import { waitUntil } from '../../scripts/lib/processes.mjs';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';
import { expireLeases } from '../support/history-that-stands.js';
import { useMoodySmtp } from '../support/moody-smtp.js';
import { buildQuietCars } from '../support/quiet-cars.js';
import { useServerProcesses } from '../support/server-process.js';

const db = useTestDatabase();
const launch = useServerProcesses();
const startSmtp = useMoodySmtp();
const { OutboxMail, MailAttempt } = modelsOf(db.sequelize);

it(
  'says of a mail that it may have gone twice when the server was killed before it could write down the answer',
  { timeout: 120_000 },
  async () => {
    const smtp = await startSmtp();
    await buildQuietCars(db, buildContext(db));
    const options = { databaseUrl: testDatabaseUrl(), settings: { SMTP_URL: smtp.url } };
    const doomed = await launch(options);
    // The mail is taken, but whoever handed it over does not live to hear of it.
    smtp.beforeAnswer = () => doomed.kill();
    expect(await waitUntil(() => smtp.taken.length === 1, 30_000), doomed.output()).toBe(true);
    const [left] = await OutboxMail.findAll();
    expect(left).toMatchObject({ state: 'sending', tries: 1, mayHaveGoneTwice: false });

    smtp.beforeAnswer = () => undefined;
    await expireLeases(db);
    await db.pool.query(
      'UPDATE outbox SET claim_expires_at = UTC_TIMESTAMP(3) - INTERVAL 1 SECOND',
    );
    await launch(options);
    const isSent = async () => (await OutboxMail.count({ where: { state: 'sent' } })) === 1;
    await waitUntil(isSent, 30_000);
    expect(await OutboxMail.findAll()).toMatchObject([
      { state: 'sent', tries: 2, mayHaveGoneTwice: true },
    ]);
    expect(smtp.taken).toEqual([left?.messageId, left?.messageId]);
    expect(await MailAttempt.findAll({ order: ['id'] })).toMatchObject([
      { outcome: 'unclear' },
      { outcome: 'accepted' },
    ]);
  },
);
