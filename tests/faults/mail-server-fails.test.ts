import { describe, expect, it } from 'vitest';
import { evaluateWatches } from '../../server/jobs/evaluate-watches.js';
import { sendOutbox } from '../../server/jobs/send-outbox.js';
import { openTransport } from '../../server/mail/transport.js';
import { modelsOf } from '../../server/models/index.js';
import { waitAfter } from '../../server/services/settle-attempt.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { useMoodySmtp, type Mood, type Stage } from '../support/moody-smtp.js';
import { buildQuietCars } from '../support/quiet-cars.js';

const db = useTestDatabase();
const startSmtp = useMoodySmtp();
const models = modelsOf(db.sequelize);

/** How long silence is borne at the stage where it comes, and no shorter anywhere else. */
const PATIENCE: Partial<Record<Stage, Parameters<typeof openTransport>[1]>> = {
  greeting: { greetingTimeout: 250 },
  answer: { socketTimeout: 500 },
};

/** A mail that is due. */
async function scene() {
  const smtp = await startSmtp();
  const context = buildContext(db, { env: { smtpUrl: smtp.url } });
  await buildQuietCars(db, context);
  const send = (patience?: Parameters<typeof openTransport>[1]) =>
    sendOutbox(context, openTransport(smtp.url, patience));
  return { smtp, context, send };
}

const outbox = () => models.OutboxMail.findAll({ order: ['id'] });

const mended: [Stage, Mood, { outcome: string; mayHaveGoneTwice: boolean }][] = [
  ['greeting', 421, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['greeting', 554, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['greeting', 'silence', { outcome: 'refused', mayHaveGoneTwice: false }],
  ['login', 454, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['login', 535, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['sender', 451, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['recipient', 450, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['body', 'drop', { outcome: 'unclear', mayHaveGoneTwice: true }],
  ['answer', 452, { outcome: 'refused', mayHaveGoneTwice: false }],
  ['answer', 'drop', { outcome: 'unclear', mayHaveGoneTwice: true }],
  ['answer', 'silence', { outcome: 'unclear', mayHaveGoneTwice: true }],
];

describe('a mail server that fails and is mended', () => {
  it.each(mended)(
    'at %s with %s: the mail waits, and goes once under its one Message-ID',
    async (stage, mood, { outcome, mayHaveGoneTwice }) => {
      const { smtp, context, send } = await scene();
      smtp.misbehave(stage, mood);
      const patience = mood === 'silence' ? PATIENCE[stage] : {};
      for (const tries of [1, 2]) {
        expect(await send(patience)).toEqual({ accepted: 0, declined: 0, troubled: 1 });
        expect(await outbox()).toMatchObject([{ state: 'pending', tries, mayHaveGoneTwice }]);
        await evaluateWatches(context);
        expect(await send()).toEqual({ accepted: 0, declined: 0, troubled: 0 });
        context.clock.advance(waitAfter(tries));
      }
      smtp.behave();
      expect(await send()).toEqual({ accepted: 1, declined: 0, troubled: 0 });
      context.clock.advance(waitAfter(12));
      expect(await send()).toEqual({ accepted: 0, declined: 0, troubled: 0 });

      const [row, ...others] = await outbox();
      expect(others).toEqual([]);
      expect(row).toMatchObject({ state: 'sent', tries: 3, mayHaveGoneTwice });
      expect(smtp.taken).toEqual([row?.messageId]);
      expect(await models.MailAttempt.findAll({ order: ['id'] })).toMatchObject([
        { outcome },
        { outcome },
        { outcome: 'accepted' },
      ]);
      expect(await models.Alert.count()).toBe(2);
    },
  );
});

describe('a mail server that will not have the mail', () => {
  it.each<[Stage, number]>([
    ['sender', 553],
    ['recipient', 550],
    ['answer', 554],
  ])('at %s with %i: it is given up, with the reason', async (stage, code) => {
    const { smtp, context, send } = await scene();
    smtp.misbehave(stage, code);
    expect(await send()).toMatchObject({ troubled: 1 });
    smtp.behave();
    context.clock.advance(waitAfter(12));
    expect(await send()).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    expect(await outbox()).toMatchObject([
      { state: 'failed', reason: expect.stringContaining(String(code)), mayHaveGoneTwice: false },
    ]);
    expect(smtp.taken).toEqual([]);
  });
});
