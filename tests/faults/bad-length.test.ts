import { describe, expect, test } from 'vitest';
import { useTestDatabase } from '../support/database.js';
import { storedReads } from '../support/ingest.js';
import { expectProblem, useDoor } from '../support/use-door.js';

const db = useTestDatabase();
const door = useDoor(db, { limits: { idleMs: 100 } });
const goodBody = () => JSON.stringify({ reads: [door.read(1), door.read(2)] });

describe('a body that is shorter than it says', () => {
  test('is answered 408 when no more comes, and nothing of it is taken', async () => {
    const socket = await door.connect();
    await socket.write(`${door.head('Content-Length: 5000')}${goodBody()}`);
    const [answer, ...others] = await socket.answersUntilClosed();
    expectProblem(answer!, 408);
    expect(others).toEqual([]);
    expect(await storedReads(db)).toEqual([]);
  });

  test('is refused when the sender says that this was all', async () => {
    const socket = await door.connect();
    await socket.write(`${door.head('Content-Length: 5000')}${goodBody()}`);
    socket.end();
    const answers = await socket.answersUntilClosed();
    expect(answers.map(({ status }) => status)).toEqual([400]);
    expect(await storedReads(db)).toEqual([]);
  });

  test.each([
    ['a chunk that says more than it holds', '400\r\n{"reads": []}\r\n0\r\n\r\n'],
    ['no last chunk', 'c\r\n{"reads":[]}\r\n'],
  ])('is refused with %s', async (_what, chunks) => {
    const socket = await door.connect();
    await socket.write(`${door.head('Transfer-Encoding: chunked')}${chunks}`);
    const [answer] = await socket.answersUntilClosed();
    expectProblem(answer!, 408);
  });
});

describe('a body that is longer than it says', () => {
  test('is cut where it said, so it is no JSON; the rest is no request', async () => {
    const body = goodBody();
    const socket = await door.connect();
    await socket.write(`${door.head(`Content-Length: ${body.length - 20}`)}${body}`);
    const answers = await socket.answersUntilClosed();
    expect(new Set(answers.map(({ status }) => status))).toEqual(new Set([400]));
    expect(await storedReads(db)).toEqual([]);
  });

  test('counts no further than it said, even where that is JSON', async () => {
    const socket = await door.connect();
    const head = door.head('Content-Length: 12');
    await socket.write(`${head}{"reads":[]}`);
    const answer = await socket.answer();
    expect(answer).toMatchObject({ status: 200, body: { accepted: 0, rejected: 0 } });
    await socket.write(`,${goodBody()}`);
    const others = await socket.answersUntilClosed();
    expect(others.map(({ status }) => status)).toEqual([400]);
    expect(await storedReads(db)).toEqual([]);
  });

  test('is refused with a chunk that holds more than it says', async () => {
    const socket = await door.connect();
    const chunks = `3\r\n${goodBody()}\r\n0\r\n\r\n`;
    await socket.write(`${door.head('Transfer-Encoding: chunked')}${chunks}`);
    const answers = await socket.answersUntilClosed();
    expect(answers.map(({ status }) => status)).toEqual([400]);
    expect(await storedReads(db)).toEqual([]);
  });
});

test('a body that says nothing of its length is empty: no JSON', async () => {
  const socket = await door.connect();
  await socket.write(door.head());
  expectProblem((await socket.answer())!, 400);
});

test('a body in many small chunks is whole', async () => {
  const chunks = [...goodBody()].map((letter) => `1\r\n${letter}\r\n`).join('');
  const socket = await door.connect();
  await socket.write(`${door.head('Transfer-Encoding: chunked')}${chunks}0\r\n\r\n`);
  expect(await socket.answer()).toMatchObject({ status: 200, body: { accepted: 2 } });
});
