import type { Pool } from 'mariadb';
import { describe, expect, test } from 'vitest';
import { releaseHeldReads } from '../../server/services/release-held-reads.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildPerson, signIn } from '../support/factories.js';
import { expectWhole, readerAt, sendAhead, standing } from '../support/held-reads.js';
import { buildIngestApp, carTag, postReads } from '../support/ingest.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const context = buildContext(db, { clock });
const app = buildIngestApp(context);
const MINUTE = 60_000;
const at = (minutes: number) => new Date(clock.now().getTime() + minutes * MINUTE).toISOString();
const administrator = async () => signIn(app, await buildPerson(db));

describe('a release', () => {
  test('is written down with who and when, and hands the reads on', async () => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    await sendAhead({ app, clock }, token, 3);
    const person = await buildPerson(db);
    const agent = await signIn(app, person);
    const send = () => agent.post('/api/held-reads/release').send({ code: 'clock-ahead' });
    expect((await send().expect(200)).body).toEqual({ data: { released: 3 } });
    const after = await standing(db);
    expect(after).toMatchObject({ released: 3, held: 0 });
    expectWhole(after);
    const reads = await db.pool.query<object[]>(
      'SELECT batch_id, seq, read_at FROM `reads` ORDER BY batch_id, seq',
    );
    expect(await db.pool.query<object[]>('SELECT * FROM releases ORDER BY batch_id, seq')).toEqual(
      reads.map((read) => ({ ...read, released_by: person.id, released_at: clock.now() })),
    );
    expect((await send().expect(200)).body).toEqual({ data: { released: 0 } });
    expect(await standing(db)).toEqual(after);
  });

  test('keeps to its site and its bound, and to a clock ahead', async () => {
    const alder = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    const cairn = await readerAt(db, 'CAIRN', 'Cairn Junction');
    await sendAhead({ app, clock }, alder.token, 3);
    await sendAhead({ app, clock }, cairn.token, 3);
    const reads = [
      { antenna: 9, tag: carTag(1), readAt: at(0) },
      { antenna: 1, tag: carTag(1), readAt: '2020-01-01T00:00:00Z' },
    ];
    await postReads(app, cairn.token, { reads }).expect(200);
    const agent = await administrator();
    const release = async (which: object) => {
      const body = { code: 'clock-ahead', ...which };
      return (await agent.post('/api/held-reads/release').send(body).expect(200)).body as object;
    };
    const until = new Date(clock.now().getTime() + 60 * MINUTE + 2_000).toISOString();
    expect(await release({ site: 'CAIRN', until })).toEqual({ data: { released: 2 } });
    expect(await release({ until: at(0) })).toEqual({ data: { released: 0 } });
    expect(await release({ site: 'ALDER' })).toEqual({ data: { released: 3 } });
    const left = await db.pool.query<{ code: string }[]>('SELECT code FROM held ORDER BY code');
    expect(left.map(({ code }) => code)).toEqual(['clock-ahead', 'too-old', 'unknown-antenna']);
  });

  test.each([
    [{}, ['/code']],
    [{ code: 'too-old' }, ['/code']],
    [{ code: 'unknown-antenna', site: 'alder' }, ['/code', '/site']],
    [{ code: 'clock-ahead', site: 'NOWHERE' }, ['/site']],
    [{ code: 'clock-ahead', until: 'tomorrow' }, ['/until']],
    [{ code: 'clock-ahead', until: '2026-12-01T12:00:00' }, ['/until']],
  ])('of %j is refused', async (body, pointers) => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    await sendAhead({ app, clock }, token, 1);
    const agent = await administrator();
    const answer = await agent.post('/api/held-reads/release').send(body).expect(400);
    const { errors } = answer.body as { errors: { pointer: string }[] };
    expect(errors.map(({ pointer }) => pointer)).toEqual(pointers);
    expect(await standing(db)).toMatchObject({ released: 0, held: 1 });
  });

  test('twice at once shares the reads out, each released once', async () => {
    const alder = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    const cairn = await readerAt(db, 'CAIRN', 'Cairn Junction');
    await sendAhead({ app, clock }, alder.token, 1_300);
    await sendAhead({ app, clock }, cairn.token, 1_300);
    const agents = [await administrator(), await administrator(), await administrator()];
    const answers = await Promise.all(
      agents.map((agent, index) =>
        agent
          .post('/api/held-reads/release')
          .send({ code: 'clock-ahead', ...(index === 1 && { site: 'CAIRN' }) })
          .expect(200),
      ),
    );
    const released = answers.map(({ body }) => (body as { data: { released: number } }).data);
    expect(released.reduce((sum, one) => sum + one.released, 0)).toBe(2_600);
    const after = await standing(db);
    expect(after).toMatchObject({ released: 2_600, held: 0 });
    expectWhole(after);
  });

  test('while reads come in loses none and ends', async () => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    await sendAhead({ app, clock }, token, 1_000);
    const agent = await administrator();
    const ingest = async () => {
      for (let first = 1_001; first < 2_000; first += 100)
        await sendAhead({ app, clock }, token, 100, first);
    };
    const [{ body }] = await Promise.all([
      agent.post('/api/held-reads/release').send({ code: 'clock-ahead' }).expect(200),
      ingest(),
    ]);
    const { released } = (body as { data: { released: number } }).data;
    expect(released).toBeGreaterThanOrEqual(1_000);
    const between = await standing(db);
    expect(between).toMatchObject({ released, held: 2_000 - released });
    expectWhole(between);
    await agent.post('/api/held-reads/release').send({ code: 'clock-ahead' }).expect(200);
    const after = await standing(db);
    expect(after).toMatchObject({ released: 2_000, held: 0 });
    expectWhole(after);
  });

  test('that is cut off leaves whole portions, and another does the rest', async () => {
    const { token } = await readerAt(db, 'ALDER', 'Alder Bend Yard');
    await sendAhead({ app, clock }, token, 1_300);
    const person = await buildPerson(db);
    const broken = { clock, db: { ...db, pool: failingPool(db.pool, 2) } };
    await expect(releaseHeldReads(broken, { personId: person.id }, {})).rejects.toThrow('cut off');
    const between = await standing(db);
    expect(between).toMatchObject({ released: 500, held: 800 });
    expectWhole(between);
    expect(await releaseHeldReads(context, { personId: person.id }, {})).toBe(800);
    const after = await standing(db);
    expect(after).toMatchObject({ released: 1_300, held: 0 });
    expectWhole(after);
  });
});

/** A pool whose `nth` portion breaks when it is about to be written into the queue. */
function failingPool(pool: Pool, nth: number): Pool {
  let portion = 0;
  const cut = (text: string) => {
    if (text.includes('INSERT INTO work') && (portion += 1) === nth) throw new Error('cut off');
  };
  const connect = async () => {
    const connection = await pool.getConnection();
    const query = (text: string, values: unknown[]) => {
      cut(text);
      return connection.query<unknown>(text, values);
    };
    return overlaid(connection, { query });
  };
  return overlaid(pool, { getConnection: connect });
}

/** The object with some of its methods replaced. */
function overlaid<T extends object>(target: T, own: Record<string, unknown>): T {
  return new Proxy(target, {
    get(_target, property) {
      if (typeof property === 'string' && property in own) return own[property];
      const value = Reflect.get(target, property) as unknown;
      return typeof value === 'function' ? (value.bind(target) as unknown) : value;
    },
  });
}
