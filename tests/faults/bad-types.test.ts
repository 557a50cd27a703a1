import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);

/** Sends a good read with one field as it is written here, between two good ones. */
async function sendWith(field: string, written: string) {
  const fields: [string, string][] = Object.entries(door.read(2)).map(([name, value]) => [
    name,
    JSON.stringify(value),
  ]);
  const read = [...new Map([...fields, [field, written]])]
    .map(([name, value]) => `"${name}":${value}`)
    .join();
  const [first, last] = [door.read(1), door.read(3)].map((good) => JSON.stringify(good));
  const answer = await door.send(`{"reads":[${first},{${read}},${last}]}`).expect(200);
  return answer.body as Record<string, unknown>;
}

const others = ['true', 'false', '[]', '[1]', '{}', '{"a":1}'];
const wrong: [string, string[]][] = [
  [
    'antenna',
    [
      ...others,
      '"1"',
      '""',
      '0',
      '-0',
      '-1',
      '256',
      '1.5',
      '1e400',
      '-1e400',
      '1e-400',
      '9007199254740993',
      '99999999999999999999',
      '1.0000000000000002',
    ],
  ],
  ['tag', [...others, '0', '12', '1e400', '-0']],
  ['readAt', [...others, '0', '1796126400000', '-1', '1e400', '""', '"now"']],
  ['rssi', [...others, '"-48"', '""', '1e400', '-1e400', '10000', '-9999.01', '1e300']],
  ['count', [...others, '"3"', '-1', '1.5', '1e400', '4294967296', '9007199254740993']],
];

describe.each(wrong)('%s', (field, values) => {
  test.each(values)('of %s refuses that read and no other', async (written) => {
    const body = await sendWith(field, written);
    expect(body).toMatchObject({ accepted: 2, duplicates: 0, held: 0, rejected: 1 });
    expect(body.problems).toEqual([
      { index: 1, code: expect.any(String) as string, detail: expect.any(String) as string },
    ]);
    expect((await storedReads(db)).map((row) => row.seq)).toEqual([0, 2]);
  });
});

describe('a number', () => {
  test.each([
    ['antenna', '1.0', { antenna_no: 1 }],
    ['antenna', '10e-1', { antenna_no: 1 }],
    ['rssi', '-0', { rssi: 0 }],
    ['rssi', '-0.0', { rssi: 0 }],
    ['rssi', '1e-400', { rssi: 0 }],
    ['rssi', '1e-7', { rssi: 0 }],
    ['rssi', '-48.25', { rssi: -48.25 }],
    ['rssi', '-9999', { rssi: -9999 }],
    ['rssi', 'null', { rssi: null }],
    ['count', '-0', { read_count: 0 }],
    ['count', '3e2', { read_count: 300 }],
    ['count', '4294967295', { read_count: 4_294_967_295 }],
    ['count', 'null', { read_count: null }],
  ])('%s may be written %s', async (field, written, row) => {
    expect(await sendWith(field, written)).toMatchObject({ accepted: 3, rejected: 0 });
    expect((await storedReads(db))[1]).toMatchObject(row);
  });

  test.each(['01', '+1', '.5', '1.', '0x10', 'NaN', 'Infinity', '-Infinity', '1_000', "'1'"])(
    'of no JSON refuses the whole body: %s',
    async (written) => {
      const read = JSON.stringify(door.read()).replace('"antenna":1', `"antenna":${written}`);
      expectProblem(await door.send(`{"reads":[${read}]}`), 400);
      expect(await storedReads(db)).toEqual([]);
    },
  );
});

describe('in the place of a read', () => {
  test.each(['null', 'true', '0', '"read"', '[]', '[[]]', '{}', '""'])(
    '%s is refused alone',
    async (written) => {
      const good = JSON.stringify(door.read());
      const answer = await door.send(`{"reads":[${written},${good}]}`).expect(200);
      expect(answer.body).toMatchObject({ accepted: 1, rejected: 1, problems: [{ index: 0 }] });
    },
  );
});

describe('in the place of the body', () => {
  test.each([
    ...['null', 'true', '0', '"reads"', '[]', '{}', '', ' ', '[{"reads":[]}]', 'undefined'],
    ...['null', '0', '"[]"', '{}', 'true'].map((value) => `{"reads":${value}}`),
    ...['null', '0', '[]', '{}', 'true'].map((value) => `{"site":${value},"reads":[]}`),
    ...[
      '{"reads":[],}',
      '{"reads":[1,]}',
      "{'reads':[]}",
      '{reads:[]}',
      '{"reads":[]}{"reads":[]}',
    ],
    ...['{"reads":[]}//', '/**/{"reads":[]}', '<reads/>', 'reads=1', '{"reads":[]}\u0000'],
  ])('%j is refused whole', async (body) => {
    expectProblem(await door.send(body), 400);
  });
});
