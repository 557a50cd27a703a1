import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);

/** A body that is nested this deep at its deepest: in a field nobody knows of a good read. */
const nested = (depth: number, [open, close]: [string, string]) => {
  const inside = depth - 3;
  const field = open.repeat(inside) + '0' + close.repeat(inside);
  const read = JSON.stringify(door.read()).replace('{', `{"more":${field},`);
  return { json: `{"reads":[${read}]}`, line: read, lineDepth: inside + 1 };
};
const lists: [string, string] = ['[', ']'];
const objects: [string, string] = ['{"a":', '}'];

describe.each([
  ['lists', lists],
  ['objects', objects],
])('%s in each other', (_what, brackets) => {
  test('are taken 32 deep', async () => {
    const { json } = nested(32, brackets);
    expect((await door.send(json).expect(200)).body).toMatchObject({ accepted: 1 });
    const { line, lineDepth } = nested(34, brackets);
    expect(lineDepth).toBe(32);
    const answer = await door.send(line, 'application/x-ndjson').expect(200);
    expect(answer.body).toMatchObject({ duplicates: 1 });
  });

  test('are refused 33 deep', async () => {
    const answer = await door.send(nested(33, brackets).json);
    expectProblem(answer, 400);
    expect(answer.body).toMatchObject({ detail: 'The body is nested more than 32 deep.' });
    expectProblem(await door.send(nested(35, brackets).line, 'application/x-ndjson'), 400);
    expect(await storedReads(db)).toEqual([]);
  });

  test('do not break the parser 100,000 deep, closed or not', async () => {
    const { json, line } = nested(100_000, brackets);
    expectProblem(await door.send(json), 400);
    expectProblem(await door.send(line, 'application/x-ndjson'), 400);
    const open = `{"reads":[${brackets[0].repeat(100_000)}`;
    expectProblem(await door.send(open), 400);
    expectProblem(await door.send(open, 'application/x-ndjson'), 400);
    expect(await storedReads(db)).toEqual([]);
  });
});

test('brackets within a text are none, whatever stands before its end', async () => {
  const text = `${'['.repeat(50)}\\"${'{'.repeat(50)}\\\\`;
  const read = JSON.stringify(door.read()).replace('{', `{"more":"${text}",`);
  expect((await door.send(`{"reads":[${read}]}`).expect(200)).body).toMatchObject({ accepted: 1 });
});

test.each([
  ['more closed than opened', `${']'.repeat(99)}{"reads":[]}`],
  ['a text without an end', `{"reads":["${'['.repeat(99)}`],
  ['a megabyte of backslashes', `{"reads":["${'\\'.repeat(1_000_001)}`],
  ['a megabyte of escaped quotes', `{"reads":["${'\\"'.repeat(500_000)}`],
])('a body with %s is no JSON', async (_what, body) => {
  expectProblem(await door.send(body), 400);
});

test('the wheel door and the portal refuse the same depth', async () => {
  const post = (path: string, depth: number) =>
    request(door.server())
      .post(path)
      .set(path === '/api/session' ? {} : { Authorization: `Bearer ${door.token()}` })
      .type('application/json')
      .serialize((sent: string) => sent)
      .send(`{"more":${'['.repeat(depth)}${']'.repeat(depth)}}`);
  expectProblem(await post('/api/ingest/wheels', 100_000), 400);
  expectProblem(await post('/api/session', 40_000), 400);
});
