import jwt from 'jsonwebtoken';
import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { createApp } from '../../server/app.js';
import { modelsOf } from '../../server/models/index.js';
import { buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import {
  buildOrganisation,
  buildPerson,
  buildSite,
  PASSWORD,
  signIn,
} from '../support/factories.js';

const db = useTestDatabase();

function start(changes: Parameters<typeof buildContext>[1] = {}) {
  const context = buildContext(db, changes);
  return { context, app: createApp(context, { clientDirectory: null }) };
}

const cookieOf = (response: { headers: Record<string, unknown> }) =>
  (response.headers['set-cookie'] as string[])[0] ?? '';

describe('signing in', () => {
  test('answers who it is and which sections open', async () => {
    const organisation = await buildOrganisation(db, { code: 'QTK', name: 'Quarry Tank' });
    const person = await buildPerson(db, { name: 'Ada Quill', roles: ['owner'], organisation });
    const { app } = start();
    const { body } = await request(app)
      .post('/api/session')
      .send({ email: person.email, password: PASSWORD })
      .expect(200);
    expect(body).toEqual({
      data: {
        user: {
          id: person.id,
          name: 'Ada Quill',
          email: person.email,
          roles: ['owner'],
          organisation: { code: 'QTK', name: 'Quarry Tank' },
          timeZone: 'UTC',
        },
        sections: ['fleet', 'alerts'],
        demoMailbox: false,
      },
    });
    const again = await (await signIn(app, person)).get('/api/session').expect(200);
    expect(again.body).toEqual(body);
  });

  test('takes the address in any case and with blanks around it', async () => {
    await buildPerson(db, { email: 'ada@tests.example' });
    await request(start().app)
      .post('/api/session')
      .send({ email: '  ADA@Tests.Example ', password: PASSWORD })
      .expect(200);
  });

  test('gives a cookie that no script reads and no other site sends', async () => {
    const person = await buildPerson(db);
    const credentials = { email: person.email, password: PASSWORD };
    const plain = await request(start().app).post('/api/session').send(credentials).expect(200);
    expect(cookieOf(plain)).toMatch(
      /^fishplate-4300=[\w.-]+; Max-Age=43200; Path=\/; HttpOnly; SameSite=Strict$/,
    );
    const https = start({ env: { publicUrl: 'https://portal.example' } });
    const secure = await request(https.app).post('/api/session').send(credentials).expect(200);
    expect(cookieOf(secure)).toMatch(/^__Host-fishplate=.*; HttpOnly; Secure; SameSite=Strict$/);
  });

  test('answers a wrong address and a wrong password in the same words', async () => {
    const person = await buildPerson(db);
    const unready = await buildPerson(db, { password: null });
    const { app } = start();
    const tries = [
      { email: person.email, password: 'not the password' },
      { email: 'nobody@tests.example', password: PASSWORD },
      { email: unready.email, password: PASSWORD },
      { email: unready.email, password: 'nobody' },
    ];
    const answers = [];
    for (const credentials of tries) {
      const { body, headers } = await request(app)
        .post('/api/session')
        .send(credentials)
        .expect(401)
        .expect('Content-Type', 'application/problem+json; charset=utf-8');
      expect(headers).not.toHaveProperty('set-cookie');
      answers.push({ ...body, requestId: null });
    }
    expect(new Set(answers.map((answer) => JSON.stringify(answer))).size).toBe(1);
    expect(answers[0]?.detail).toBe('Address or password is not right.');
  });

  test('refuses a password that bcrypt would cut', async () => {
    const long = 'x'.repeat(72);
    const person = await buildPerson(db, { password: long });
    const { app } = start();
    const send = (password: string) =>
      request(app).post('/api/session').send({ email: person.email, password });
    await send(long).expect(200);
    await send(`${long}y`).expect(401);
  });

  test.each([
    ['nothing', {}, ['/email', '/password']],
    ['wrong types', { email: 7, password: ['x'] }, ['/email', '/password']],
    ['blanks', { email: '  ', password: '' }, ['/email', '/password']],
    ['a list', [], ['']],
    ['a huge password', { email: 'a@b.example', password: 'x'.repeat(201) }, ['/password']],
  ])('names every fault of %s', async (_what, sent, pointers) => {
    const { body } = await request(start().app).post('/api/session').send(sent).expect(400);
    expect(body.errors.map((fault: { pointer: string }) => fault.pointer)).toEqual(pointers);
  });

  test('stops after repeated failures for one address, and says for how long', async () => {
    const person = await buildPerson(db);
    const other = await buildPerson(db);
    const app = createApp(buildContext(db), {
      clientDirectory: null,
      limits: { signIn: { perAddress: 3, perSource: 100, seconds: 60 } },
    });
    const send = (email: string, password: string) =>
      request(app).post('/api/session').send({ email, password });
    for (let count = 0; count < 3; count += 1) await send(person.email, 'wrong').expect(401);
    const { body, headers } = await send(person.email.toUpperCase(), PASSWORD).expect(429);
    expect(body.title).toBe('Too many requests');
    expect(Number(headers['retry-after'])).toBeGreaterThan(0);
    await send(other.email, PASSWORD).expect(200);
  });

  test('counts failures sent all at once', async () => {
    const person = await buildPerson(db);
    const app = createApp(buildContext(db), {
      clientDirectory: null,
      limits: { signIn: { perAddress: 3, perSource: 100, seconds: 60 } },
    });
    const sent = Array.from({ length: 10 }, () =>
      request(app).post('/api/session').send({ email: person.email, password: 'wrong' }),
    );
    const statuses = (await Promise.all(sent)).map(({ status }) => status).sort();
    expect(statuses).toEqual([401, 401, 401, 429, 429, 429, 429, 429, 429, 429]);
  });

  test('counts by who asks, as the proxy beside a published portal tells it', async () => {
    const limits = { signIn: { perAddress: 1, perSource: 100, seconds: 60 } };
    const { email } = await buildPerson(db);
    const statusFrom = async (app: ReturnType<typeof createApp>, source: string) => {
      const sent = { email, password: 'wrong' };
      const tried = request(app).post('/api/session').set('X-Forwarded-For', source).send(sent);
      return (await tried).status;
    };
    const env = { publicUrl: 'https://portal.example' };
    const published = createApp(buildContext(db, { env }), { clientDirectory: null, limits });
    expect(await statusFrom(published, '203.0.113.7')).toBe(401);
    expect(await statusFrom(published, '203.0.113.7')).toBe(429);
    expect(await statusFrom(published, '203.0.113.8')).toBe(401);
    const bare = createApp(buildContext(db), { clientDirectory: null, limits });
    expect(await statusFrom(bare, '203.0.113.7')).toBe(401);
    expect(await statusFrom(bare, '203.0.113.8')).toBe(429);
  });

  test('gives failures back after a success', async () => {
    const person = await buildPerson(db);
    const app = createApp(buildContext(db), {
      clientDirectory: null,
      limits: { signIn: { perAddress: 2, perSource: 2, seconds: 60 } },
    });
    for (let round = 0; round < 3; round += 1) {
      await request(app)
        .post('/api/session')
        .send({ email: person.email, password: PASSWORD })
        .expect(200);
    }
  });
});

describe('a session', () => {
  test('opens nothing once it has been signed out of', async () => {
    const person = await buildPerson(db);
    const { app } = start();
    const agent = await signIn(app, person);
    const kept = await request(app)
      .post('/api/session')
      .send({ email: person.email, password: PASSWORD });
    const cookie = cookieOf(kept).split(';')[0] ?? '';
    await request(app).get('/api/session').set('Cookie', cookie).expect(200);
    const gone = await request(app).delete('/api/session').set('Cookie', cookie).expect(204);
    expect(cookieOf(gone)).toContain('Max-Age=0');
    await request(app).get('/api/session').set('Cookie', cookie).expect(401);
    await request(app).delete('/api/session').set('Cookie', cookie).expect(401);
    await agent.get('/api/session').expect(200);
  });

  test('ends after twelve hours', async () => {
    const { app, context } = start();
    const agent = await signIn(app, await buildPerson(db));
    context.clock.advance(12 * 3_600_000 - 1_000);
    await agent.get('/api/session').expect(200);
    context.clock.advance(1_000);
    await agent.get('/api/session').expect(401);
  });

  test('that has expired leaves no row behind at the next sign-in', async () => {
    const { app, context } = start();
    const person = await buildPerson(db);
    await signIn(app, person);
    context.clock.advance(12 * 3_600_000);
    await signIn(app, person);
    expect(await modelsOf(db.sequelize).Session.count()).toBe(1);
  });

  test('is gone with its person, and follows a change of role at once', async () => {
    const { Person } = modelsOf(db.sequelize);
    const { app } = start();
    const person = await buildPerson(db);
    const agent = await signIn(app, person);
    await agent.get('/api/people').expect(200);
    await Person.update({ roles: 'clerk' }, { where: { id: person.id } });
    await agent.get('/api/people').expect(403);
    await Person.destroy({ where: { id: person.id } });
    await agent.get('/api/session').expect(401);
  });

  test('is not opened by a token that somebody else made', async () => {
    const { app, context } = start();
    const person = await buildPerson(db);
    await signIn(app, person);
    const session = await modelsOf(db.sequelize).Session.findOne();
    const claims = { sid: session?.id, exp: 4_102_444_800 };
    const { sessionSecret } = context.env;
    const tokens = [
      jwt.sign(claims, 'some other secret of thirty-two chars'),
      jwt.sign(claims, sessionSecret, { algorithm: 'HS512' }),
      jwt.sign(claims, '', { algorithm: 'none' }),
      jwt.sign({ ...claims, exp: 1 }, sessionSecret),
      jwt.sign({ ...claims, sid: 'x' }, sessionSecret),
      jwt.sign({ ...claims, sid: '00000000-0000-4000-8000-000000000000' }, sessionSecret),
      'x',
      '',
    ];
    for (const token of tokens) {
      await request(app).get('/api/session').set('Cookie', `fishplate-4300=${token}`).expect(401);
    }
    const right = jwt.sign(claims, sessionSecret, { algorithm: 'HS256' });
    await request(app).get('/api/session').set('Cookie', `fishplate-4300=${right}`).expect(200);
    await request(app)
      .get('/api/session')
      .set('Cookie', `fishplate-4300=${right}`)
      .set('Authorization', 'Bearer something')
      .expect(401);
  });

  test('stores nothing that opens the portal', async () => {
    await signIn(start().app, await buildPerson(db));
    const session = await modelsOf(db.sequelize).Session.findOne({ raw: true });
    expect(Object.keys(session ?? {}).sort()).toEqual(
      ['createdAt', 'endedAt', 'expiresAt', 'id', 'personId'].sort(),
    );
  });
});

describe('a page of another site', () => {
  const change = async (headers: Record<string, string>) => {
    const agent = await signIn(start().app, await buildPerson(db));
    const site = await buildSite(db);
    return agent
      .post(`/api/sites/${site.code}/reader-token`)
      .set({ Host: '127.0.0.1:4300', ...headers });
  };

  test.each([
    [{ Origin: 'https://elsewhere.example' }],
    [{ Origin: 'http://127.0.0.1:4301' }],
    [{ Origin: 'null' }],
    [{ Origin: 'not an origin' }],
    [{ Origin: 'http://127.0.0.1:4300', 'Sec-Fetch-Site': 'cross-site' }],
  ])('changes nothing: %o', async (headers) => {
    const { status, body } = await change(headers);
    expect(status).toBe(403);
    expect(body.detail).toBe('This came from a page of another site.');
    expect(await modelsOf(db.sequelize).ReaderToken.count()).toBe(0);
  });

  test('is none when it is ours, or no page at all', async () => {
    expect((await change({ Origin: 'http://127.0.0.1:4300' })).status).toBe(201);
    expect((await change({})).status).toBe(201);
  });

  test('cannot sign anybody in', async () => {
    const person = await buildPerson(db);
    await request(start().app)
      .post('/api/session')
      .set('Origin', 'https://elsewhere.example')
      .send({ email: person.email, password: PASSWORD })
      .expect(403);
  });
});
