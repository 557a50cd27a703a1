import request from 'supertest';
import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);
const TYPE = 'application/x-ndjson';
const line = (number: number) => JSON.stringify(door.read(number));
const send = async (body: string | Buffer) =>
  (await door.send(body, TYPE).expect(200)).body as object;

describe('lines that end in ways of their own', () => {
  test.each([
    ['carriage returns', (lines: string[]) => lines.map((text) => `${text}\r\n`).join('')],
    ['no end at the last', (lines: string[]) => lines.join('\n')],
    [
      'blank lines between, before and after',
      (lines: string[]) => `\n\r\n \t\n${lines.join('\n\n\n')}\n\n`,
    ],
    ['blanks around them', (lines: string[]) => lines.map((text) => `\t ${text} `).join('\n')],
    ['a byte order mark', (lines: string[]) => `\ufeff${lines.join('\n')}`],
    ['a mark on a line of its own', (lines: string[]) => `\ufeff\n${lines.join('\n')}`],
  ])('%s', async (_what, join) => {
    expect(await send(join([line(1), line(2), line(3)]))).toEqual({
      accepted: 3,
      duplicates: 0,
      held: 0,
      rejected: 0,
      problems: [],
    });
    expect(await storedReads(db)).toHaveLength(3);
  });

  test.each([
    ['carriage returns alone', '\r'],
    ['line separators of text', '\u2028'],
    ['commas', ','],
    ['nothing', ''],
    ['record separators', '\u001e'],
  ])('%s make one line of them, which is no JSON', async (_what, separator) => {
    expect(await send([line(1), line(2)].join(separator))).toMatchObject({
      accepted: 0,
      rejected: 1,
      problems: [{ index: 0, code: 'not-json' }],
    });
  });
});

describe('a line', () => {
  test.each([
    ['not-json', '{"antenna":1,'],
    ['not-json', 'antenna=1'],
    ['not-json', '\u0000'],
    ['not-json', '\ufeff{}'],
    ['not-json', '{} {}'],
    ['not-an-object', '[]'],
    ['not-an-object', '"read"'],
    ['not-an-object', 'null'],
    ['missing-antenna', '{}'],
    ['missing-antenna', '{"reads":[]}'],
  ])('%s: %s spoils no other', async (code, bad) => {
    const body = await send(`${line(1)}\n${bad}\n\n${line(2)}\n`);
    expect(body).toMatchObject({ accepted: 2, rejected: 1, problems: [{ index: 1, code }] });
    expect(await storedReads(db)).toMatchObject([{ seq: 0 }, { seq: 2 }]);
  });

  test('of a megabyte is judged like a short one', async () => {
    const long = line(2).replace('{', `{"more":"${'x'.repeat(1_000_000)}",`);
    const broken = `{"tag":"${'x'.repeat(900_000)}`;
    expect(await send(`${line(1)}\n${long}\n${broken}`)).toMatchObject({
      accepted: 2,
      rejected: 1,
    });
  });

  test('that is all refuses nothing: a body in the form of lists is one bad read', async () => {
    const body = JSON.stringify({ reads: [door.read()] });
    expect(await send(body)).toMatchObject({ rejected: 1 });
    expect(await send(JSON.stringify({ reads: [door.read()] }, null, 2))).toMatchObject({
      accepted: 0,
    });
    expectProblem(await door.send(`${line(1)}\n${line(2)}`), 400);
  });
});

test('no lines at all are no reads', async () => {
  for (const body of ['', '\n', '\r\n\r\n', ' ', '\ufeff']) {
    expect(await send(body)).toMatchObject({ accepted: 0, rejected: 0, problems: [] });
  }
  expect(await storedReads(db)).toEqual([]);
});

test.each(['site=%00', 'site=', 'site=A&site=B', 'site[]=A', 'sites=A', 'site=%E0%A4%A'])(
  'the site in the address is checked: %s',
  async (query) => {
    const answer = await request(door.server())
      .post(`/api/ingest/reads?${query}`)
      .auth(door.token(), { type: 'bearer' })
      .type(TYPE)
      .send(line(1));
    expectProblem(answer, answer.status === 403 ? 403 : 400);
    expect(await storedReads(db)).toEqual([]);
  },
);
