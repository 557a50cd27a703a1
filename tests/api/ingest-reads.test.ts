import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { encodeAei } from '../../server/domain/identifiers/aei.js';
import { buildClock, buildContext } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { buildAntenna, buildUnit } from '../support/factories.js';
import { buildIngestApp, buildReader, carTag, postReads, storedReads } from '../support/ingest.js';

const db = useTestDatabase();
const clock = buildClock('2026-12-01T12:00:00.000Z');
const app = buildIngestApp(buildContext(db, { clock }));
const at = (seconds: number) => new Date(clock.now().getTime() + seconds * 1000).toISOString();

/** An EPC of the GS1 rail kind (GIAI-96), as in the standards tests. */
const GIAI = '3414257BF400000000003039';

const workRows = () =>
  db.pool.query<object[]>('SELECT id, kind, read_count, payload FROM work ORDER BY id');
const countOf = async (table: string) => {
  const [row] = await db.pool.query<{ n: number }[]>(`SELECT COUNT(*) AS n FROM \`${table}\``);
  return row?.n;
};

describe('a read that is taken', () => {
  test('is stored as it came, beside one row of work, before the answer', async () => {
    const { site, token } = await buildReader(db);
    const tag = carTag(40127);
    const read = {
      antenna: 1,
      tag: ` ${tag.toLowerCase()}\n`,
      readAt: '2026-12-01T05:59:58.890999-06:00',
      rssi: -48.5,
      count: 3,
    };
    const answer = await postReads(app, token, { site: site.code, reads: [read] }).expect(200);
    expect(answer.body).toEqual({
      accepted: 1,
      duplicates: 0,
      held: 0,
      rejected: 0,
      problems: [],
    });
    const [stored, ...others] = await storedReads(db);
    expect(others).toEqual([]);
    expect(stored).toMatchObject({
      seq: 0,
      site_id: site.id,
      antenna_no: 1,
      tag,
      read_at: new Date('2026-12-01T11:59:58.890Z'),
      rssi: -48.5,
      read_count: 3,
      hold_code: null,
    });
    expect(await workRows()).toEqual([
      { id: stored?.batch_id, kind: 'reads', read_count: 1, payload: null },
    ]);
  });

  test('needs no register: strangers, text and boxes are taken in', async () => {
    const { token } = await buildReader(db);
    const tags = [
      encodeAei({ groupCode: 5, initial: 'QLOX', number: 7, side: 'right' }),
      encodeAei({ groupCode: 6, initial: 'QEND', number: 9, side: 'left' }),
      encodeAei({ groupCode: 10, initial: 'ZQXU', number: 305438, side: 'left' }),
      'QTKX 40127',
      'ZQXU 305438 1',
      '21 81 2471 217-3',
    ];
    const reads = tags.map((tag, index) => ({ antenna: 1, tag, readAt: at(-index) }));
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toMatchObject({ accepted: 6, held: 0, rejected: 0 });
    expect((await storedReads(db)).map((row) => row.tag)).toEqual(tags);
  });
});

describe('a read that came before', () => {
  test('is counted and changes nothing, whatever else it says now', async () => {
    const { token } = await buildReader(db);
    const read = { antenna: 1, tag: carTag(1), readAt: at(0), rssi: -40 };
    await postReads(app, token, { reads: [read] }).expect(200);
    const before = await storedReads(db);
    const sameInstant = { ...read, readAt: at(0).replace('Z', '+00:00'), rssi: -99 };
    const { body } = await postReads(app, token, { reads: [sameInstant] }).expect(200);
    expect(body).toMatchObject({ accepted: 0, duplicates: 1, held: 0, rejected: 0 });
    expect(await storedReads(db)).toEqual(before);
    expect(await countOf('work')).toBe(1);
  });

  test('is told apart from new ones of the same request', async () => {
    const { token } = await buildReader(db);
    const read = (number: number) => ({ antenna: 1, tag: carTag(number), readAt: at(0) });
    await postReads(app, token, { reads: [read(1), read(2)] }).expect(200);
    const reads = [read(3), read(2), read(4), read(3), read(1), read(3)];
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toMatchObject({ accepted: 2, duplicates: 4, held: 0, rejected: 0 });
    expect(await countOf('reads')).toBe(4);
    expect((await workRows())[1]).toMatchObject({ read_count: 2 });
  });

  test('stays one read with eight clients sending the same at once in any order', async () => {
    const { token } = await buildReader(db);
    const all = Array.from({ length: 400 }, (_, index) => ({
      antenna: 1,
      tag: carTag(index % 80),
      readAt: at(-Math.floor(index / 80)),
    }));
    const answers = await Promise.all(
      Array.from({ length: 8 }, (_, client) =>
        postReads(app, token, { reads: all.map((_read, i) => all[(i * 7 + client * 50) % 400]) }),
      ),
    );
    expect(answers.map((answer) => answer.status)).toEqual(Array(8).fill(200));
    const sum = (key: string) => answers.reduce((n, { body }) => n + (body[key] as number), 0);
    expect([sum('accepted'), sum('duplicates')]).toEqual([400, 2800]);
    expect(await countOf('reads')).toBe(400);
  });
});

describe('a malformed read', () => {
  const sound = { antenna: 1, tag: carTag(1), readAt: '2026-12-01T11:00:00Z' };
  const without = (key: string) => ({ ...sound, [key]: undefined });

  test.each([
    ['not-an-object', 7],
    ['not-an-object', null],
    ['not-an-object', [sound]],
    ['missing-antenna', without('antenna')],
    ['missing-tag', without('tag')],
    ['missing-tag', { ...sound, tag: '  ' }],
    ['tag-too-long', { ...sound, tag: 'X'.repeat(65) }],
    ['tag-too-long', { ...sound, tag: 'é'.repeat(33) }],
    ['missing-time', without('readAt')],
    ['missing-time', { ...sound, readAt: null }],
    ['invalid-time', { ...sound, readAt: '2026-12-01T11:00:00' }],
    ['invalid-time', { ...sound, readAt: '2026-02-30T11:00:00Z' }],
    ['invalid-time', { ...sound, readAt: '1989-12-31T23:59:59Z' }],
    ['invalid-time', { ...sound, readAt: '2101-01-01T00:00:00Z' }],
    ['invalid-time', { ...sound, readAt: 1_796_000_000_000 }],
    ['bad-value', { ...sound, antenna: 0 }],
    ['bad-value', { ...sound, antenna: 256 }],
    ['bad-value', { ...sound, antenna: '1' }],
    ['bad-value', { ...sound, tag: 42 }],
    ['bad-value', { ...sound, rssi: 'loud' }],
    ['bad-value', { ...sound, rssi: 1e9 }],
    ['bad-value', { ...sound, count: 1.5 }],
    ['bad-value', { ...sound, count: -1 }],
  ])('%s: %j', async (code, bad) => {
    const { token } = await buildReader(db);
    const reads = [sound, bad, { ...sound, tag: carTag(2) }];
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toEqual({
      accepted: 2,
      duplicates: 0,
      held: 0,
      rejected: 1,
      problems: [{ index: 1, code, detail: expect.stringMatching(/\.$/) as string }],
    });
  });

  test('of every kind leaves nothing behind', async () => {
    const { token } = await buildReader(db);
    const { body } = await postReads(app, token, { reads: [1, {}] }).expect(200);
    expect(body).toMatchObject({ accepted: 0, rejected: 2 });
    expect(await countOf('work')).toBe(0);
  });
});

describe('a read that is set aside', () => {
  const sound = { antenna: 1, tag: carTag(1) };

  test.each([
    ['unknown-antenna', { ...sound, antenna: 9 }],
    ['undecodable-tag', { ...sound, tag: 'NO READ' }],
    ['undecodable-tag', { ...sound, tag: 'QTKX\u0000 1' }],
    // The first published sample with data format code 0 (see the standards tests).
    ['undecodable-tag', { ...sound, tag: '2F3E06C007DB1E139000000000000001' }],
    // The derived sample: side bit flipped, first check sum wrong.
    ['check-failed', { ...sound, tag: '2F3E06C007D91E139000000000000331' }],
    ['check-failed', { ...sound, tag: 'ZQXU 305438 5' }],
    ['unmapped-epc', { ...sound, tag: GIAI }],
    [
      'not-equipment',
      { ...sound, tag: encodeAei({ groupCode: 12, initial: 'QMRK', number: 1, side: 'left' }) },
    ],
    ['clock-ahead', { ...sound, readAt: '2026-12-01T12:05:00.001Z' }],
    ['too-old', { ...sound, readAt: '2025-10-31T23:59:59.999Z' }],
  ])('%s: stored, listed, and counted once', async (code, read) => {
    const { site, token } = await buildReader(db);
    const reads = [{ readAt: at(-60), ...read }];
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toEqual({
      accepted: 0,
      duplicates: 0,
      held: 1,
      rejected: 0,
      problems: [{ index: 0, code, detail: expect.stringMatching(/\.$/) as string }],
    });
    const [stored] = await storedReads(db);
    expect(stored).toMatchObject({ tag: read.tag, hold_code: code });
    const held = await db.pool.query<object[]>(
      'SELECT batch_id, seq, site_id, code, config_version FROM held',
    );
    expect(held).toEqual([
      {
        batch_id: stored?.batch_id,
        seq: 0,
        site_id: site.id,
        code,
        config_version: stored?.config_version,
      },
    ]);
    const again = await postReads(app, token, { reads }).expect(200);
    expect(again.body).toMatchObject({ held: 0, duplicates: 1, problems: [] });
    expect(await countOf('held')).toBe(1);
  });

  test('is none at the very bounds of the clock', async () => {
    const { token } = await buildReader(db);
    const reads = ['2026-12-01T12:05:00.000Z', '2025-11-01T00:00:00.000Z'].map((readAt) => ({
      ...sound,
      readAt,
    }));
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toMatchObject({ accepted: 2, held: 0 });
  });

  test('with an EPC is one only while no car is registered with it', async () => {
    const { token } = await buildReader(db);
    await buildUnit(db, { tags: [{ value: GIAI, validFrom: new Date(at(-3600)) }] });
    await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
    const reads = [
      { antenna: 1, tag: `${GIAI}00000000`, readAt: at(-60) },
      { antenna: 1, tag: GIAI, readAt: at(-7200) },
    ];
    const { body } = await postReads(app, token, { reads }).expect(200);
    expect(body).toMatchObject({ accepted: 1, held: 1, problems: [{ index: 1 }] });
  });

  test('for its antenna is so only until the antenna is known', async () => {
    const { readPoint, token } = await buildReader(db);
    const send = (seconds: number) =>
      postReads(app, token, { reads: [{ ...sound, antenna: 2, readAt: at(seconds) }] }).expect(200);
    expect((await send(-2)).body).toMatchObject({ held: 1 });
    await buildAntenna(db, { readPoint, number: 2 });
    await db.pool.query('UPDATE config_state SET version = version + 1 WHERE id = 1');
    expect((await send(-1)).body).toMatchObject({ accepted: 1 });
    const [first, second] = await storedReads(db);
    expect(second?.config_version).toBeGreaterThan(first?.config_version ?? Infinity);
  });
});

describe('reads one a line', () => {
  const post = (token: string, query: string, body: string) =>
    request(app)
      .post(`/api/ingest/reads${query}`)
      .auth(token, { type: 'bearer' })
      .type('application/x-ndjson')
      .send(body);

  test('are answered like a list; a line that is no JSON does not stop the others', async () => {
    const { site, token } = await buildReader(db);
    const line = (number: number) =>
      JSON.stringify({ antenna: 1, tag: carTag(number), readAt: at(0) });
    const body = `${line(1)}\r\n\n{"antenna": 1,\n${line(2)}\n"text"\n`;
    const answer = await post(token, `?site=${site.code}`, body).expect(200);
    expect(answer.body).toEqual({
      accepted: 2,
      duplicates: 0,
      held: 0,
      rejected: 2,
      problems: [
        { index: 1, code: 'not-json', detail: 'This line is not JSON.' },
        { index: 3, code: 'not-an-object', detail: expect.any(String) as string },
      ],
    });
    await post(token, `?site=${site.code}`, '').expect(200);
  });

  test('for another site, or with a parameter nobody knows, are refused', async () => {
    const { token } = await buildReader(db);
    await post(token, '?site=ELSEWHERE', '{}').expect(403);
    const { body } = await post(token, '?sites=A', '{}').expect(400);
    expect(body).toMatchObject({ errors: [{ pointer: '?sites' }] });
  });
});
