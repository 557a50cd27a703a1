import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db);

/** A good read and one whose tag is these bytes. */
const bodyWith = (bytes: number[]): Buffer => {
  const [before, after] = JSON.stringify({ reads: [door.read(), door.read()] })
    .replace(/"tag":"\w+"(?!.*"tag")/, '"tag":"@"')
    .split('@') as [string, string];
  return Buffer.concat([Buffer.from(before), Buffer.from(bytes), Buffer.from(after)]);
};

describe('bytes that are no UTF-8', () => {
  test.each([
    ['a lone continuation byte', [0x80]],
    ['a character that breaks off', [0xe2, 0x82]],
    ['an overlong slash', [0xc0, 0xaf]],
    ['an overlong NUL', [0xc0, 0x80]],
    ['half a surrogate pair', [0xed, 0xa0, 0x80]],
    ['a character beyond the last one', [0xf4, 0x90, 0x80, 0x80]],
    ['bytes that never occur', [0xfe, 0xff]],
    ['Latin-1', [0xe9, 0x20]],
  ])('refuse the whole body: %s', async (_what, bytes) => {
    const answer = await door.send(bodyWith(bytes));
    expectProblem(answer, 400);
    expect(answer.body).toMatchObject({ detail: 'The body is not UTF-8.' });
    expectProblem(await door.send(bodyWith(bytes), 'application/x-ndjson'), 400);
    expect(await storedReads(db)).toEqual([]);
  });

  test.each(['utf-16le', 'utf16le', 'ucs-2'])('refuse a body in %s', async (name) => {
    const text = JSON.stringify({ reads: [door.read()] });
    const body = Buffer.from(text, 'utf16le');
    expectProblem(await door.send(body), 400);
    expectProblem(await door.send(body, `application/json; charset=${name}`), 415);
    const marked = Buffer.concat([Buffer.from([0xff, 0xfe]), body]);
    expectProblem(await door.send(marked), 400);
    expect(await storedReads(db)).toEqual([]);
  });
});

describe('bytes that are UTF-8', () => {
  test.each([
    ['a character of two bytes', 'é'],
    ['the last character', '\u{10ffff}'],
    ['a character that joins others', '👩‍🚒'],
    ['the replacement character itself', '\ufffd'],
    ['letters that look alike', 'ＱＴＫＸ １'],
    ['a character and its parts, which are not the same', 'e\u0301'],
  ])('are kept byte by byte: %s', async (_what, tag) => {
    const answer = await door.send(bodyWith([...Buffer.from(tag)])).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1, held: 1, rejected: 0 });
    const [, stored] = await storedReads(db);
    expect(stored?.tag).toBe(tag);
  });

  test('may say so in the media type, in any case and quoted', async () => {
    const body = JSON.stringify({ reads: [door.read()] });
    for (const charset of ['utf-8', 'UTF-8', '"utf-8"', 'utf8']) {
      await door.send(body, `application/json; charset=${charset}`).expect(200);
    }
  });

  test('may begin with a byte order mark', async () => {
    const answer = await door.send(`\ufeff${JSON.stringify({ reads: [door.read()] })}`).expect(200);
    expect(answer.body).toMatchObject({ accepted: 1 });
  });
});

test('half a character written as an escape is one read refused, a whole one is kept', async () => {
  const { readAt } = door.read();
  const body = `{"reads":[
    {"antenna":1,"tag":"\\ud83d","readAt":"${readAt}"},
    {"antenna":1,"tag":"\\ude82\\ud83d","readAt":"${readAt}"},
    {"antenna":1,"tag":"\\ud83d\\ude82","readAt":"${readAt}"}]}`;
  const answer = await door.send(body).expect(200);
  expect(answer.body).toMatchObject({
    held: 1,
    rejected: 2,
    problems: [{ code: 'bad-value' }, { code: 'bad-value' }, { code: 'undecodable-tag' }],
  });
  expect((await storedReads(db)).map((row) => row.tag)).toEqual(['🚂']);
});
