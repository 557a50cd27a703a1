import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);
const send = async (...tags: unknown[]) => {
  const reads = tags.map((tag) => ({ ...door.read(), tag }));
  const answer = await door.send(JSON.stringify({ reads })).expect(200);
  return answer.body as object;
};
const storedTags = async () => (await storedReads(db)).map((row) => row.tag);

describe('64 bytes', () => {
  test.each([
    ['letters', 'X'.repeat(64), 'X'.repeat(65)],
    ['characters of two bytes', 'é'.repeat(32), 'é'.repeat(33)],
    ['characters of three bytes', `${'€'.repeat(21)}x`, '€'.repeat(22)],
    ['characters of four bytes', '🚃'.repeat(16), '🚃'.repeat(17)],
    ['a mixture', `${'🚃'.repeat(15)}éé`, `${'🚃'.repeat(15)}ééx`],
  ])('of %s are kept whole; more is refused, not cut', async (_what, longest, tooLong) => {
    expect(await send(longest, tooLong)).toMatchObject({
      held: 1,
      rejected: 1,
      problems: [{ code: 'undecodable-tag' }, { index: 1, code: 'tag-too-long' }],
    });
    expect(await storedTags()).toEqual([longest]);
  });

  test('are counted without the blanks around them', async () => {
    const tag = 'X'.repeat(64);
    const body = await send(`  ${tag}\n`, `${' '.repeat(1_000_000)}${tag}`);
    expect(body).toMatchObject({ held: 1, duplicates: 1, rejected: 0 });
    expect(await storedTags()).toEqual([tag]);
  });

  test('are far from a megabyte', async () => {
    expect(await send('X'.repeat(1_900_000))).toMatchObject({
      rejected: 1,
      problems: [{ code: 'tag-too-long' }],
    });
  });
});

describe('a tag of odd characters', () => {
  const controls = Array.from({ length: 32 }, (_, code) => `a${String.fromCharCode(code)}b`);

  test('is kept byte by byte, each control character too', async () => {
    const tags = [...controls, 'a\u007fb', 'a\u0080b', 'a\u009fb', '\u0000', 'a\u0000', '\u0000a'];
    expect(await send(...tags)).toMatchObject({ accepted: 0, held: tags.length, rejected: 0 });
    expect(await storedTags()).toEqual(tags);
    expect(await send(...tags)).toMatchObject({ duplicates: tags.length });
  });

  test.each([
    ['quotes', "'; DROP TABLE `reads`; --"],
    ['a backslash and a quote', "\\'); --"],
    ['a double quote', 'a"b'],
    ['a percent sign', '%s%00%n'],
    ['a right-to-left mark', 'a\u202eb'],
    ['no width at all', 'a\u200bb'],
    ['a line separator', 'a\u2028b'],
    ['a mark within', 'a\ufeffb'],
    ['markup', '<script>alert(1)</script>'],
  ])('is kept as it came: %s', async (_what, tag) => {
    expect(await send(tag)).toMatchObject({ held: 1 });
    expect(await storedTags()).toEqual([tag]);
  });

  test('is told from one that only looks alike', async () => {
    const tags = ['a b', 'a\u00a0b', 'a  b', 'A B', 'a b\u0000', 'á b', 'a\u0301 b'];
    expect(await send(...tags)).toMatchObject({ held: tags.length, duplicates: 0 });
    expect(await storedTags()).toEqual(tags);
  });

  test.each(['', ' ', '\t\r\n', '\u00a0\u2003\ufeff'])(
    'that is nothing but blanks is missing: %j',
    async (tag) => {
      expect(await send(tag)).toMatchObject({ rejected: 1, problems: [{ code: 'missing-tag' }] });
    },
  );
});

describe('a site code of odd characters', () => {
  test.each(['\u0000', '\u0000SITE', 'A\nB', "'; --", '💥', 'x'.repeat(100_000), '../ALDER', ''])(
    'is the code of another site: %j',
    async (site) => {
      const body = JSON.stringify({ site, reads: [door.read()] });
      expectProblem(await door.send(body), 403);
      expect(await storedReads(db)).toEqual([]);
    },
  );

  test.each(['\u0000', ' ', '\n', '\u200b'])('is not trimmed to the own one: %j', async (end) => {
    const body = JSON.stringify({ site: `${door.siteCode()}${end}`, reads: [door.read()] });
    expectProblem(await door.send(body), 403);
    const lower = JSON.stringify({ site: door.siteCode().toLowerCase(), reads: [] });
    expectProblem(await door.send(lower), 403);
  });
});
