import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);
const numbers = Array.from({ length: 10_000 }, (_, n) => n);
const tenThousand = Object.fromEntries(numbers.map((n) => [`field${n}`, n]));

describe('ten thousand fields', () => {
  test('in a read are no matter', async () => {
    const reads = [{ ...tenThousand, ...door.read() }];
    const answer = await door.send(JSON.stringify({ reads })).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1 });
    const line = JSON.stringify({ ...door.read(2), ...tenThousand });
    const lines = await door.send(line, 'application/x-ndjson').expect(200);
    expect(lines.body).toMatchObject({ accepted: 1 });
  });

  test('beside the reads are no matter', async () => {
    const answer = await door.send(JSON.stringify({ ...tenThousand, reads: [door.read()] }));
    expect(answer.body).toMatchObject({ accepted: 1 });
  });

  test('in the place of reads are no list of reads', async () => {
    const answer = await door.send(JSON.stringify({ reads: tenThousand }));
    expectProblem(answer, 400);
    expect(answer.body).toMatchObject({ errors: [{ pointer: '/reads' }] });
  });

  test('in the query are refused, in a bounded answer', async () => {
    const query = numbers.slice(0, 1_500).map((n) => `field${n}=`);
    const answer = await request(door.server())
      .post(`/api/ingest/reads?${query.join('&')}`)
      .auth(door.token(), { type: 'bearer' })
      .send({ reads: [door.read()] });
    expectProblem(answer, 400);
    const socket = await door.connect();
    const long = numbers.map((n) => `field${n}=`).join('&');
    await socket.write(door.head('Content-Length: 2').replace(' HTTP', `?${long} HTTP`));
    expect((await socket.answer())?.status).toBe(431);
    expect(await storedReads(db)).toEqual([]);
  });
});

describe('a field that comes twice', () => {
  const { antenna, tag } = { antenna: 1, tag: 'QTKX 1' };

  test('counts as it came last', async () => {
    const { readAt } = door.read();
    const read = `{"antenna":9,"antenna":${antenna},"tag":7,"tag":"${tag}","readAt":"${readAt}"}`;
    const answer = await door.send(`{"reads":[${read}]}`).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1, held: 0, rejected: 0 });
    expect(await storedReads(db)).toMatchObject([{ antenna_no: antenna, tag }]);
  });

  test.each([
    ['two lists of reads', (read: string) => `{"reads":[${read}],"reads":[]}`],
    [
      'two lists, one spelled with an escape',
      (read: string) => `{"reads":[${read}],"re\\u0061ds":[]}`,
    ],
    ['two sites', (read: string) => `{"site":"X","site":"${door.siteCode()}","reads":[${read}]}`],
  ])('is refused where reads could be lost: %s', async (_what, bodyOf) => {
    const answer = await door.send(bodyOf(JSON.stringify(door.read())));
    expectProblem(answer, 400);
    expect(await storedReads(db)).toEqual([]);
  });

  test('is only looked for where reads could be lost', async () => {
    const read = JSON.stringify(door.read()).replace('{', '{"reads":1,"reads":{"reads":2},');
    const body = `{"a":"reads","b":"\\"reads\\":","c":{"reads":[1]} , "reads" :[${read}]}`;
    expect((await door.send(body).expect(200)).body).toMatchObject({ accepted: 1 });
  });
});

describe('fields with names of the language', () => {
  test('are fields like others', async () => {
    const { readAt } = door.read();
    const hidden = `{"__proto__":{"antenna":1,"tag":"QTKX 1","readAt":"${readAt}"}}`;
    const named = JSON.stringify(door.read()).replace(
      '{',
      '{"__proto__":{"polluted":true},"constructor":{"prototype":{"polluted":true}},"toString":1,',
    );
    const body = `{"__proto__":{"reads":[]},"reads":[${hidden},${named}]}`;
    const answer = await door.send(body).expect(200);
    expect(answer.body).toMatchObject({
      accepted: 1,
      rejected: 1,
      problems: [{ index: 0, code: 'missing-antenna' }],
    });
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });

  test.each(['{"__proto__":{"reads":[]}}', '{"constructor":{"reads":[]}}'])(
    'stand for nothing: %s has no reads',
    async (body) => {
      expectProblem(await door.send(body), 400);
    },
  );

  test.each(['__proto__', 'constructor', 'toString', 'hasOwnProperty'])(
    'are no parameters of a query: %s',
    async (name) => {
      const answer = await request(door.server())
        .post(`/api/ingest/reads?${name}=1`)
        .auth(door.token(), { type: 'bearer' })
        .send({ reads: [] });
      expectProblem(answer, 400);
      expect(answer.body).toMatchObject({ errors: [{ pointer: `?${name}` }] });
    },
  );

  test.each(['__proto__', 'constructor', 'toString'])('are no sites: %s', async (site) => {
    const body = JSON.stringify({ site, reads: [door.read()] });
    expectProblem(await door.send(body), 403);
    expect(await storedReads(db)).toEqual([]);
  });
});
