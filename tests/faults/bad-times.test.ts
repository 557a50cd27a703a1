import { describe, expect, test } from 'vitest';
import { buildClock } from '../support/context.js';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db, { clock: buildClock('2026-12-01T12:00:00.000Z') });
const send = async (readAt: unknown) => {
  const reads = [door.read(1), { ...door.read(2), readAt }];
  const answer = await door.send(JSON.stringify({ reads })).expect(200);
  return answer.body as object;
};
/** When the read with the time in question was, as it is stored. */
const storedAt = async () =>
  (await storedReads(db)).find((row) => row.seq === 1)?.read_at.toISOString();

test('a time that is none refuses its read and no other', async () => {
  const times: [string, unknown][] = [
    ['the year 1989', '1989-12-31T23:59:59.999Z'],
    ['the year 2101', '2101-01-01T00:00:00Z'],
    ['the year 9999', '9999-12-31T23:59:59Z'],
    ['the year 0', '0000-01-01T00:00:00Z'],
    ['a clock that starts at 1970', '1970-01-01T00:00:00Z'],
    ['a negative year', '-2026-12-01T11:00:00Z'],
    ['a year of six digits', '+012026-12-01T11:00:00Z'],
    ['a year of two digits', '26-12-01T11:00:00Z'],
    ['no offset', '2026-12-01T11:00:00'],
    ['a zone for an offset', '2026-12-01T11:00:00[America/Chicago]'],
    ['a letter other than Z', '2026-12-01T11:00:00A'],
    ['an offset without a colon', '2026-12-01T11:00:00+0100'],
    ['an offset of hours', '2026-12-01T11:00:00+01'],
    ['an offset of a day', '2026-12-01T11:00:00+24:00'],
    ['an offset with a true minus', '2026-12-01T11:00:00\u221201:00'],
    ['no time', '2026-12-01'],
    ['no seconds', '2026-12-01T11:00Z'],
    ['a blank for the T', '2026-12-01 11:00:00Z'],
    ['the basic form', '20261201T110000Z'],
    ['a day of the year', '2026-335T11:00:00Z'],
    ['a week', '2026-W49-2T11:00:00Z'],
    ['the thirtieth of February', '2026-02-30T11:00:00Z'],
    ['the 29th of February of a common year', '2026-02-29T11:00:00Z'],
    ['month 13', '2026-13-01T11:00:00Z'],
    ['day 0', '2026-12-00T11:00:00Z'],
    ['hour 24', '2026-11-30T24:00:00Z'],
    ['minute 60', '2026-12-01T11:60:00Z'],
    ['second 61', '2026-12-01T11:00:61Z'],
    ['a comma for the point', '2026-12-01T11:00:00,5Z'],
    ['a point and no fraction', '2026-12-01T11:00:00.Z'],
    ['blanks around it', ' 2026-12-01T11:00:00Z '],
    ['a line end after it', '2026-12-01T11:00:00Z\n'],
    ['a NUL in it', '2026-12-01T11:00:00\u0000Z'],
    ['digits of another script', '２026-12-01T11:00:00Z'],
    ['a megabyte of fraction and no end', `2026-12-01T11:00:00.${'9'.repeat(1_000_000)}`],
    ['seconds since 1970', 1_796_126_400],
    ['a list', ['2026-12-01T11:00:00Z']],
    ['an object', { $date: '2026-12-01T11:00:00Z' }],
  ];
  const spoiled = times.map(([, readAt]) => ({ ...door.read(2), readAt }));
  const reads = [door.read(1), ...spoiled, door.read(3)];
  const { body } = await door.send(JSON.stringify({ reads })).expect(200);
  expect(body).toMatchObject({ accepted: 2, held: 0, rejected: times.length });
  const { problems } = body as { problems: { index: number; code: string }[] };
  expect(problems.map(({ index, code }) => [times[index - 1]?.[0], code])).toEqual(
    times.map(([what]) => [what, 'invalid-time']),
  );
  expect((await storedReads(db)).map((row) => row.seq)).toEqual([0, times.length + 1]);
});

describe('a time that is rarely seen', () => {
  test.each([
    ['lower-case letters', '2026-12-01t11:00:00z', '2026-12-01T11:00:00.000Z'],
    ['nine digits of a second', '2026-12-01T11:00:00.123456789Z', '2026-12-01T11:00:00.123Z'],
    ['nines that are not rounded up', '2026-12-01T11:00:00.999999999Z', '2026-12-01T11:00:00.999Z'],
    ['one digit of a second', '2026-12-01T11:00:00.5Z', '2026-12-01T11:00:00.500Z'],
    ['a leap second', '2026-06-30T23:59:60Z', '2026-07-01T00:00:00.000Z'],
    ['a leap second elsewhere', '2026-06-30T16:59:60.250-07:00', '2026-07-01T00:00:00.250Z'],
    ['an offset of an odd quarter', '2026-12-01T16:45:00+05:45', '2026-12-01T11:00:00.000Z'],
    ['the widest offset', '2026-11-30T11:01:00-23:59', '2026-12-01T11:00:00.000Z'],
    ['an unknown offset', '2026-12-01T11:00:00-00:00', '2026-12-01T11:00:00.000Z'],
    [
      'the hour that a summer time repeats',
      '2026-11-01T01:30:00-05:00',
      '2026-11-01T06:30:00.000Z',
    ],
    [
      'the hour that a summer time leaves out',
      '2026-03-08T02:30:00-06:00',
      '2026-03-08T08:30:00.000Z',
    ],
  ])('%s is taken as it is', async (_what, readAt, instant) => {
    expect(await send(readAt)).toMatchObject({ accepted: 2, rejected: 0 });
    expect(await storedAt()).toBe(instant);
  });

  test('is the same read whichever way it is written', async () => {
    const ways = [
      '2026-12-01T11:00:00.123Z',
      '2026-12-01t11:00:00.123999z',
      '2026-12-01T06:00:00.123-05:00',
    ];
    const reads = ways.map((readAt) => ({ ...door.read(), readAt }));
    const answer = await door.send(JSON.stringify({ reads })).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1, duplicates: 2 });
  });
});

describe('a time that is far off but real', () => {
  test.each([
    ['too-old', '1990-01-01T00:00:00Z', '1990-01-01T00:00:00.000Z'],
    ['too-old', '2000-02-29T12:00:00Z', '2000-02-29T12:00:00.000Z'],
    ['clock-ahead', '2026-12-01T12:05:00.001Z', '2026-12-01T12:05:00.001Z'],
    ['clock-ahead', '2038-01-19T03:14:08Z', '2038-01-19T03:14:08.000Z'],
    ['clock-ahead', '2100-12-31T23:59:59.999Z', '2100-12-31T23:59:59.999Z'],
  ])('is stored and set aside as %s: %s', async (code, readAt, instant) => {
    expect(await send(readAt)).toMatchObject({ accepted: 1, held: 1, problems: [{ code }] });
    expect(await storedAt()).toBe(instant);
    expect(await send(readAt)).toMatchObject({ duplicates: 2 });
  });
});
