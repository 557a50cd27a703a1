import type { IncomingMessage } from 'node:http';
import { PassThrough } from 'node:stream';
import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import { receiveBody } from '../../server/ingest/receive-body.js';

const IDLE_MS = 10_000;
const arrive = () => Object.assign(new PassThrough(), { headers: {} });
const receive = (stream: PassThrough, ...bounds: [number?, ((bytes: number) => void)?]) =>
  receiveBody(stream as unknown as IncomingMessage, IDLE_MS, ...bounds);

beforeEach(() => {
  vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
});
afterEach(() => {
  vi.useRealTimers();
});

test('a body may take its time as long as something of it comes', async () => {
  const stream = arrive();
  const body = receive(stream);
  for (const piece of ['{"re', 'ads"', ': []', '}']) {
    await vi.advanceTimersByTimeAsync(IDLE_MS - 1);
    stream.write(piece);
    await vi.advanceTimersByTimeAsync(0);
  }
  stream.end();
  expect((await body).toString()).toBe('{"reads": []}');
});

test('a body of which nothing comes any more is given up, and what comes late is thrown away', async () => {
  const stream = arrive();
  const refused = expect(receive(stream)).rejects.toMatchObject({ status: 408 });
  stream.write('{');
  await vi.advanceTimersByTimeAsync(IDLE_MS - 1);
  stream.write('"');
  await vi.advanceTimersByTimeAsync(IDLE_MS + 1);
  await refused;
  stream.end('reads": []}');
  await vi.advanceTimersByTimeAsync(0);
  expect(stream.readableLength).toBe(0);
});

test('what counts the bytes may refuse the rest', async () => {
  const stream = arrive();
  let counted = 0;
  const body = receive(stream, 100, (bytes) => {
    counted += bytes;
    if (counted > 10) throw Object.assign(new Error('enough'), { status: 429 });
  });
  const refused = expect(body).rejects.toMatchObject({ status: 429 });
  stream.write('12345678');
  await vi.advanceTimersByTimeAsync(0);
  stream.write('12345678');
  await refused;
  expect(counted).toBe(16);
});
