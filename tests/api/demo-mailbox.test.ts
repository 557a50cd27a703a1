import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import os from 'node:os';
import path from 'node:path';
import request from 'supertest';
import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { mailboxDirectory } from '../../server/config/env.js';
import { openTransport } from '../../server/mail/transport.js';
import { startSmtpFake } from '../../server/smtp-fake/start-smtp-fake.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';

const db = useTestDatabase();
let dataDir = '';

beforeEach(async () => {
  dataDir = await mkdtemp(path.join(os.tmpdir(), 'fishplate-mailbox-'));
});
afterEach(() => rm(dataDir, { recursive: true }));

const appOf = (demo: boolean) => createApp(buildContext(db, { env: { demo, dataDir } }));

/** Sends mails with these subjects, a minute apart, through the fake. */
async function send(...subjects: string[]): Promise<void> {
  const clock = buildClock('2026-03-04T15:00:00.000Z');
  const directory = mailboxDirectory({ dataDir });
  const fake = await startSmtpFake({ port: 0, directory, clock });
  const transport = openTransport(fake.url);
  for (const subject of subjects) {
    await transport({
      messageId: '<one@portal.example>',
      from: 'Fishplate <fishplate@portal.example>',
      to: { name: 'Ada', address: 'ada@quarry.example' },
      subject,
      text: `Look: http://portal.example/equipment/QTKX40127?a=1&b=2 and <b>this</b>`,
      html: '<p>Look</p>',
    });
    clock.advance(60_000);
  }
  await fake.close();
}

describe('the mailbox of the demo', () => {
  test('lists mail, newest first, and opens one with its links', async () => {
    await send('older', 'newer <script>alert(1)</script>');
    const app = appOf(true);
    const list = await request(app).get('/demo/mailbox').expect(200).expect('Content-Type', /html/);
    expect(list.text).toContain('2 mails caught');
    expect(list.text.indexOf('newer')).toBeLessThan(list.text.indexOf('older'));
    expect(list.text).not.toContain('<script>');
    const [, link] = /<a href="([^"]+)">newer/.exec(list.text) ?? [];
    const one = await request(app)
      .get(link ?? '')
      .expect(200);
    expect(one.text).toContain(
      '<a href="http://portal.example/equipment/QTKX40127?a=1&amp;b=2">http://portal.example/equipment/QTKX40127?a=1&amp;b=2</a>',
    );
    expect(one.text).toContain('&lt;b&gt;this&lt;/b&gt;');
    expect(one.text).not.toMatch(/<script|style=|onclick/);
  });

  test('keeps to the strict content policy, with its style in a file of its own', async () => {
    const app = appOf(true);
    const page = await request(app).get('/demo/mailbox').expect(200);
    expect(page.text).toContain('No mail yet');
    expect(page.headers['content-security-policy']).toContain("style-src 'self'");
    await request(app).get('/demo/mailbox.css').expect(200).expect('Content-Type', /css/);
  });

  test('gives the list as JSON to those signed in', async () => {
    await send('one');
    const app = appOf(true);
    await request(app).get('/api/demo/mailbox').expect(401);
    const agent = await signIn(app, await buildPerson(db, { roles: ['owner'] }));
    const { body } = await agent.get('/api/demo/mailbox').expect(200);
    expect(body.data).toMatchObject([{ subject: 'one', to: '"Ada" <ada@quarry.example>' }]);
    expect(body.next).toBeNull();
  });

  test('opens nothing but mails of the directory', async () => {
    await mkdir(mailboxDirectory({ dataDir }), { recursive: true });
    await writeFile(path.join(dataDir, 'secret.eml'), 'Subject: secret\n\nsecret');
    await writeFile(path.join(mailboxDirectory({ dataDir }), 'other.eml'), 'Subject: x\n\nx');
    const app = appOf(true);
    for (const id of ['..%2Fsecret', 'other', '0000000000000-000000000000', '%00']) {
      await request(app).get(`/demo/mailbox/${id}`).expect(404);
    }
  });

  test('does not exist outside the demo', async () => {
    await send('one');
    const app = appOf(false);
    for (const address of ['/demo/mailbox', '/demo/mailbox.css', '/api/demo/mailbox']) {
      await request(app).get(address).expect(404);
    }
  });
});
