import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);

/** A good read, but with one field as it is written here. */
function readWith(field: string, written: string): string {
  const fields: [string, string][] = Object.entries(door.read(2)).map(([name, value]) => [
    name,
    JSON.stringify(value),
  ]);
  const read = new Map([...fields, [field, written]]);
  return `{${[...read].map(([name, value]) => `"${name}":${value}`).join()}}`;
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
  test(`of ${values.length} wrong kinds refuses that read and no other`, async () => {
    const spoiled = values.map((value) => readWith(field, value));
    const good = [JSON.stringify(door.read(1)), JSON.stringify(door.read(3))];
    const answer = await door.send(`{"reads":[${[good[0], ...spoiled, good[1]].join()}]}`);
    const { problems, ...counts } = answer.body as { problems: { index: number }[] };
    expect(counts).toEqual({ accepted: 2, duplicates: 0, held: 0, rejected: values.length });
    const refused = problems.map(({ index }) => values[index - 1]);
    expect(refused).toEqual(values);
    expect((await storedReads(db)).map((row) => row.seq)).toEqual([0, values.length + 1]);
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
    const answer = await door.send(`{"reads":[${readWith(field, written)}]}`);
    expect(answer.body).toMatchObject({ accepted: 1, rejected: 0 });
    expect(await storedReads(db)).toMatchObject([row]);
  });

  test('of no JSON refuses the whole body', async () => {
    const numbers = [
      '01',
      '+1',
      '.5',
      '1.',
      '0x10',
      'NaN',
      'Infinity',
      '-Infinity',
      '1_000',
      "'1'",
    ];
    for (const written of numbers) {
      expectProblem(await door.send(`{"reads":[${readWith('antenna', written)}]}`), 400);
    }
    expect(await storedReads(db)).toEqual([]);
  });
});

test('what is no read in the place of one is refused alone', async () => {
  const others = ['null', 'true', '0', '"read"', '[]', '[[]]', '{}', '""'];
  const good = JSON.stringify(door.read());
  const answer = await door.send(`{"reads":[${others.join()},${good}]}`).expect(200);
  expect(answer.body).toMatchObject({ accepted: 1, rejected: others.length });
});

test('what is no body in the place of one is refused whole', async () => {
  const bodies = [
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
  ];
  for (const body of bodies) {
    const answer = await door.send(body);
    expect(answer.status, body).toBe(400);
    expectProblem(answer, 400);
  }
});
