import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { aarIdentity } from '../../server/domain/identifiers/identity.js';
import { evaluateWatches } from '../../server/jobs/evaluate-watches.js';
import { sendOutbox } from '../../server/jobs/send-outbox.js';
import type { Transport } from '../../server/mail/transport.js';
import { modelsOf } from '../../server/models/index.js';
import { claimMail } from '../../server/services/claim-mail.js';
import { settleAttempt, waitAfter } from '../../server/services/settle-attempt.js';
import { startAttempt } from '../../server/services/start-attempt.js';
import { readMailbox } from '../../server/smtp-fake/read-mailbox.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  buildUnit,
  signIn,
} from '../support/factories.js';
import { placeUnit } from '../support/places.js';
import { buildWatch, useSmtpFakes } from '../support/watches.js';

const db = useTestDatabase();
const startFake = useSmtpFakes();
const HOUR = 3_600_000;

/** An owner whose two cars have gone quiet and whose watch has just noticed. */
async function scene(watchValues: Parameters<typeof buildWatch>[2] = {}) {
  const fake = await startFake();
  const context = buildContext(db, {
    env: { smtpUrl: fake.url, publicUrl: 'http://portal.example' },
  });
  const { clock } = context;
  clock.set('2026-03-04T15:00:00.000Z');
  const organisation = await buildOrganisation(db);
  const person = await buildPerson(db, {
    name: 'Ada Quill',
    email: 'ada@quarry.example',
    roles: ['owner'],
    organisation,
    timeZone: 'America/Chicago',
  });
  const site = await buildSite(db, { code: 'ALDER', name: 'Alder Bend Yard' });
  const cars = [];
  for (const [number, hours] of [
    [40127, 100],
    [40128, 80],
  ] as const) {
    const identity = aarIdentity('QTKX', number);
    const unit = await buildUnit(db, { owner: organisation, identity });
    const at = new Date(clock.now().getTime() - hours * HOUR);
    await placeUnit(db, unit, { state: 'enRoute', site, at });
    cars.push(unit);
  }
  const watch = await buildWatch(db, person, { name: 'Quiet ones', ...watchValues });
  await evaluateWatches(context);
  const mailbox = () => readMailbox(fake.directory);
  return { fake, context, clock, organisation, person, site, cars, watch, mailbox };
}

const outbox = () => modelsOf(db.sequelize).OutboxMail.findAll({ order: ['id'] });
const attempts = () => modelsOf(db.sequelize).MailAttempt.findAll({ order: ['id'] });

/** As if the worker that holds the claim had died long ago. */
const letClaimsExpire = () =>
  db.pool.query('UPDATE outbox SET claim_expires_at = UTC_TIMESTAMP(3) - INTERVAL 1 SECOND');

const recording = (mails: string[]): Transport => {
  return (mail) => {
    mails.push(mail.messageId);
    return Promise.resolve({ outcome: 'accepted', detail: 'taken' });
  };
};

describe('telling by mail', () => {
  test('one mail tells of all that one watch raised together', async () => {
    const { context, mailbox } = await scene();
    expect(await sendOutbox(context)).toEqual({ accepted: 1, declined: 0, troubled: 0 });
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    const [mail, ...others] = await mailbox();
    expect(others).toEqual([]);
    const [row] = await outbox();
    expect(row?.state).toBe('sent');
    expect(mail).toMatchObject({
      messageId: row?.messageId,
      from: '"Fishplate" <fishplate@portal.example>',
      to: '"Ada Quill" <ada@quarry.example>',
      subject: '2 cars quiet (Quiet ones)',
    });
    expect(mail?.messageId).toMatch(/^<[0-9a-f-]{36}@portal\.example>$/);
    expect(mail?.text).toContain('QTKX 40127  Quiet 4 d');
    expect(mail?.text).toContain('Last read at Alder Bend Yard, Sat 28 Feb 2026 05:00 CST');
    expect(mail?.html).toContain('<a href="http://portal.example/equipment/QTKX40127">');
  });

  test('each recipient gets a mail of their own, in their own time zone', async () => {
    const colleague = await buildPerson(db, { roles: ['administrator'], timeZone: 'Europe/Oslo' });
    const { context, mailbox } = await scene({
      people: [colleague],
      addresses: ['desk@yard.example'],
    });
    await sendOutbox(context);
    const mails = await mailbox();
    expect(mails.map((mail) => mail.to).sort()).toEqual([
      `"${colleague.name}" <${colleague.email}>`,
      'desk@yard.example',
    ]);
    const textTo = (address: string) => mails.find((mail) => mail.to.includes(address))?.text;
    expect(textTo(colleague.email)).toContain('Sat 28 Feb 2026 12:00 GMT+1');
    expect(textTo('desk@yard.example')).toContain('Sat 28 Feb 2026 05:00 CST');
  });

  test('without a mail server everything waits', async () => {
    const { context } = await scene();
    const mute = { ...context, env: { ...context.env, smtpUrl: null } };
    expect(await sendOutbox(mute)).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    expect(await outbox()).toMatchObject([{ state: 'pending', tries: 0 }]);
  });

  test('a late mail says how late it is', async () => {
    const { context, clock, mailbox } = await scene();
    clock.advance(3 * HOUR);
    await sendOutbox(context);
    const [mail] = await mailbox();
    expect(mail?.text).toContain(
      'This mail is 3 h late: the watch noticed on Wed 4 Mar 2026 09:00 CST.',
    );
  });
});

describe('a try that fails', () => {
  test('is repeated later under the same Message-ID', async () => {
    const { context, clock, fake, mailbox } = await scene();
    fake.refuse(1);
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 0, troubled: 1 });
    expect(await outbox()).toMatchObject([{ state: 'pending', tries: 1, mayHaveGoneTwice: false }]);
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    clock.advance(waitAfter(1));
    expect(await sendOutbox(context)).toMatchObject({ accepted: 1 });
    const [row] = await outbox();
    expect((await mailbox()).map((mail) => mail.messageId)).toEqual([row?.messageId]);
    expect(await attempts()).toMatchObject([
      { number: 1, outcome: 'refused' },
      { number: 2, outcome: 'accepted' },
    ]);
  });

  test('is not repeated when it was refused for good', async () => {
    const { context, clock, fake, mailbox } = await scene();
    fake.refuse(1, 550);
    await sendOutbox(context);
    clock.advance(24 * HOUR);
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    expect(await outbox()).toMatchObject([{ state: 'failed', mayHaveGoneTwice: false }]);
    expect(await mailbox()).toEqual([]);
  });

  test('is repeated a bounded number of times, further and further apart', async () => {
    const { context, clock, fake } = await scene();
    fake.refuse(1_000);
    let tries = 0;
    for (let hour = 0; hour < 30; hour += 1) {
      tries += (await sendOutbox(context)).troubled;
      clock.advance(HOUR);
    }
    expect(tries).toBe(12);
    expect(await outbox()).toMatchObject([{ state: 'failed', tries: 12 }]);
    expect([1, 2, 3, 20].map(waitAfter)).toEqual([15_000, 30_000, 60_000, HOUR]);
  });

  test('with the line cut before the answer is unclear, and says it may have gone twice', async () => {
    const { context, clock, fake, mailbox } = await scene();
    fake.cutAfterData(1);
    expect(await sendOutbox(context)).toMatchObject({ troubled: 1 });
    expect(await outbox()).toMatchObject([{ state: 'pending', mayHaveGoneTwice: true }]);
    clock.advance(waitAfter(1));
    expect(await sendOutbox(context)).toMatchObject({ accepted: 1 });
    const [row] = await outbox();
    expect(row).toMatchObject({ state: 'sent', mayHaveGoneTwice: true });
    const ids = (await mailbox()).map((mail) => mail.messageId);
    expect(ids).toEqual([row?.messageId, row?.messageId]);
  });

  test('with nobody listening has certainly not gone', async () => {
    const { context, fake } = await scene();
    await fake.close();
    await sendOutbox(context);
    expect(await attempts()).toMatchObject([{ outcome: 'refused' }]);
    expect(await outbox()).toMatchObject([{ state: 'pending', mayHaveGoneTwice: false }]);
  });
});

describe('the claim', () => {
  test('lets two workers send each mail once', async () => {
    const { context, person } = await scene();
    for (let index = 0; index < 8; index += 1) await buildWatch(db, person);
    await evaluateWatches(context);
    const mails: string[] = [];
    await Promise.all([1, 2, 3].map(() => sendOutbox(context, recording(mails))));
    expect(mails).toHaveLength(9);
    expect(new Set(mails).size).toBe(9);
  });

  test('is committed, and the try written down, before the mail is handed over', async () => {
    const { context } = await scene();
    const seen: unknown[] = [];
    await sendOutbox(context, async () => {
      seen.push(...(await outbox()), ...(await attempts()));
      return { outcome: 'accepted', detail: 'taken' };
    });
    expect(seen).toMatchObject([
      { state: 'sending', epoch: 1, tries: 1 },
      { outcome: 'started', number: 1 },
    ]);
  });

  test('of a worker that died before sending is taken over, and nothing is in doubt', async () => {
    const { context, clock, mailbox } = await scene();
    const [row] = await outbox();
    await claimMail(db, row?.id ?? 0, clock.now());
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 0, troubled: 0 });
    await letClaimsExpire();
    expect(await sendOutbox(context)).toMatchObject({ accepted: 1 });
    expect(await outbox()).toMatchObject([{ state: 'sent', epoch: 2, mayHaveGoneTwice: false }]);
    expect(await mailbox()).toHaveLength(1);
  });

  test('of a worker that died while sending is taken over, marked as perhaps gone twice', async () => {
    const { context, clock } = await scene();
    const [row] = await outbox();
    const claim = await claimMail(db, row?.id ?? 0, clock.now());
    expect(claim && (await startAttempt(db, claim, clock.now()))).toMatchObject({ number: 1 });
    await letClaimsExpire();
    expect(await sendOutbox(context)).toMatchObject({ accepted: 1 });
    expect(await outbox()).toMatchObject([{ state: 'sent', mayHaveGoneTwice: true }]);
    expect(await attempts()).toMatchObject([
      { number: 1, outcome: 'unclear' },
      { number: 2, outcome: 'accepted' },
    ]);
  });

  test('that was lost lets its old holder start no try and change no outcome', async () => {
    const { context, clock } = await scene();
    const [row] = await outbox();
    const id = row?.id ?? 0;
    const old = await claimMail(db, id, clock.now());
    if (!old) throw new Error('The mail was not due.');
    const attempt = await startAttempt(db, old, clock.now());
    await letClaimsExpire();
    const taken = await claimMail(db, id, clock.now());
    expect(taken?.epoch).toBe(2);
    expect(await startAttempt(db, old, clock.now())).toBeNull();
    if (!attempt) throw new Error('The claim was lost too early.');
    await settleAttempt(db, old, attempt, { outcome: 'accepted', detail: 'taken' }, clock.now());
    expect(await outbox()).toMatchObject([{ state: 'sending', epoch: 2, mayHaveGoneTwice: true }]);
    expect(await sendOutbox(context)).toMatchObject({ accepted: 0 });
  });
});

describe('a mail whose matter has changed', () => {
  test('is declined when everything cleared meanwhile', async () => {
    const { context, clock, cars, site, mailbox } = await scene();
    for (const unit of cars) await placeUnit(db, unit, { state: 'enRoute', site, at: clock.now() });
    await evaluateWatches(context);
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 1, troubled: 0 });
    expect(await mailbox()).toEqual([]);
    expect(await outbox()).toMatchObject([
      { state: 'declined', tries: 0, reason: 'It cleared before the mail went.' },
    ]);
  });

  test('is declined for a read that no evaluation has noticed yet', async () => {
    const { context, clock, cars, site } = await scene();
    for (const unit of cars) await placeUnit(db, unit, { state: 'enRoute', site, at: clock.now() });
    expect(await sendOutbox(context)).toMatchObject({ declined: 1 });
  });

  test('is declined when everything was acknowledged', async () => {
    const { context, person } = await scene();
    const agent = await signIn(createApp(context), person);
    for (const { id } of (await agent.get('/api/alerts').expect(200)).body.data) {
      await agent.post(`/api/alerts/${id}/acknowledge`).expect(200);
    }
    expect(await sendOutbox(context)).toMatchObject({ declined: 1 });
    expect(await outbox()).toMatchObject([{ reason: 'It was acknowledged before the mail went.' }]);
  });

  test('tells only of what is left', async () => {
    const { context, clock, cars, site, mailbox } = await scene();
    const [first] = cars;
    if (first) await placeUnit(db, first, { state: 'enRoute', site, at: clock.now() });
    await evaluateWatches(context);
    await sendOutbox(context);
    const [mail] = await mailbox();
    expect(mail?.subject).toBe('QTKX 40128: quiet 3 d');
    expect(mail?.text).not.toContain('40127');
  });

  test('is declined when the watch has ended, or the recipient may no longer see it', async () => {
    const { context, person, watch, organisation } = await scene();
    const outsider = await buildPerson(db, { roles: ['owner'] });
    await buildWatch(db, person, { name: 'Another', people: [outsider] });
    await evaluateWatches(context);
    const agent = await signIn(createApp(context), person);
    await agent.delete(`/api/watches/${watch.id}`).expect(204);
    expect(await sendOutbox(context)).toEqual({ accepted: 0, declined: 2, troubled: 0 });
    expect(await outbox()).toMatchObject([
      { state: 'declined', reason: 'The watch has ended.' },
      { state: 'declined', reason: 'The recipient may no longer see what it is about.' },
    ]);
    expect(outsider.organisationId).not.toBe(organisation.id);
  });

  test('waits while a departure is provisional', async () => {
    const { context, clock, site, mailbox } = await scene();
    const dispatcher = await buildPerson(db, { roles: ['dispatcher'], sites: [site] });
    const stranger = await buildUnit(db, { owner: null, registered: false });
    const arrivedAt = new Date(clock.now().getTime() - 100 * HOUR);
    await placeUnit(db, stranger, { state: 'onHand', site, at: arrivedAt, arrivedAt });
    await buildWatch(db, dispatcher, { kind: 'dwell' });
    await evaluateWatches(context);
    const finalAt = new Date(clock.now().getTime() + 12 * HOUR);
    await placeUnit(db, stranger, { state: 'left', site, at: clock.now(), arrivedAt, finalAt });
    expect(await sendOutbox(context)).toEqual({ accepted: 1, declined: 0, troubled: 0 });
    expect(await outbox()).toMatchObject([{ state: 'sent' }, { state: 'pending', tries: 0 }]);
    await placeUnit(db, stranger, { state: 'onHand', site, at: clock.now(), arrivedAt });
    clock.advance(HOUR);
    expect(await sendOutbox(context)).toMatchObject({ accepted: 1 });
    expect((await mailbox())[0]?.subject).toContain('past its limit, 4 d at Alder Bend Yard');
  });
});

describe('headers', () => {
  test('cannot be added by any name', async () => {
    const { context, person, watch, mailbox } = await scene();
    const nasty = 'x\r\nBcc: victim@elsewhere.example\r\n\r\nbody';
    await watch.update({ name: nasty });
    await person.update({ name: nasty });
    await sendOutbox(context);
    const [mail, ...others] = await mailbox();
    expect(others).toEqual([]);
    expect(mail?.headers.map((header) => header.name)).not.toContain('bcc');
    expect(mail?.subject).toBe('2 cars quiet (x Bcc: victim@elsewhere.example body)');
    expect(mail?.to).toContain('<ada@quarry.example>');
  });

  test('mark the mail as written by a machine', async () => {
    const { context, mailbox } = await scene();
    await sendOutbox(context);
    const [mail] = await mailbox();
    expect(mail?.headers).toContainEqual({
      name: 'auto-submitted',
      line: 'Auto-Submitted: auto-generated',
    });
  });
});

describe('GET /api/mail', () => {
  test('shows an administrator every mail and every try, page by page', async () => {
    const { context, clock, fake, watch, person } = await scene();
    fake.refuse(1);
    await sendOutbox(context);
    clock.advance(waitAfter(1));
    await sendOutbox(context);
    await buildWatch(db, person, { name: 'Newer' });
    await evaluateWatches(context);
    const agent = await signIn(createApp(context), await buildPerson(db));
    const first = await agent.get('/api/mail?limit=1').expect(200);
    expect(first.body.data).toMatchObject([
      { watch: { name: 'Newer' }, state: 'pending', nextTryAt: clock.now().toISOString() },
    ]);
    const { body } = await agent.get(`/api/mail?limit=1&cursor=${first.body.next}`).expect(200);
    expect(body.next).toBeNull();
    expect(body.data).toMatchObject([
      {
        to: 'ada@quarry.example',
        watch: { id: watch.id, name: 'Quiet ones' },
        state: 'sent',
        mayHaveGoneTwice: false,
        nextTryAt: null,
        sentAt: clock.now().toISOString(),
        attempts: [
          { number: 1, outcome: 'refused', detail: expect.stringContaining('451') },
          { number: 2, outcome: 'accepted' },
        ],
      },
    ]);
    const sent = await agent.get('/api/mail?state=sent').expect(200);
    expect(sent.body.data).toHaveLength(1);
  });

  test('is for administrators alone', async () => {
    const { context, person } = await scene();
    const app = createApp(context);
    await request(app).get('/api/mail').expect(401);
    const agent = await signIn(app, person);
    await agent.get('/api/mail').expect(403);
    const admin = await signIn(app, await buildPerson(db));
    const { body } = await admin.get('/api/mail?state=lost').expect(400);
    expect(body.errors).toMatchObject([{ pointer: '?state' }]);
  });
});
