import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import request from 'supertest';
import { afterAll, afterEach, beforeAll, beforeEach, expect } from 'vitest';
import { problemSchema } from '../../server/contract/common.js';
import type { IngestLimits } from '../../server/ingest/limits.js';
import type { Database } from '../../server/lib/database.js';
import { buildContext, type TestClock } from './context.js';
import { buildIngestApp, buildReader, carTag } from './ingest.js';
import { RawSocket } from './raw-socket.js';

/** The ingest door as readers meet it: a server of its own that listens, and one reader. */
export interface Door {
  context: ReturnType<typeof buildContext>;
  server(): Server;
  token(): string;
  siteCode(): string;
  /** A good read of car `number`, as of now. */
  read(number?: number): { antenna: number; tag: string; readAt: string };
  /** Sends a body as it stands to the reads door; JSON unless another type is given. */
  send(body: string | Buffer, type?: string): request.Test;
  /** The head of a request to the reads door, up to and with the blank line. */
  head(...headers: string[]): string;
  connect(): Promise<RawSocket>;
}

/**
 * A listening server for a test file. After each test the same server must take the next good
 * request of the same reader, and of the same request again each read as a duplicate.
 */
export function useDoor(
  db: Database,
  options: { limits?: Partial<IngestLimits>; clock?: TestClock } = {},
): Door {
  const context = buildContext(db, options.clock && { clock: options.clock });
  const server = createServer(buildIngestApp(context, options.limits));
  const sockets: RawSocket[] = [];
  let reader: Awaited<ReturnType<typeof buildReader>>;
  beforeAll(async () => {
    server.listen(0, '127.0.0.1');
    await once(server, 'listening');
  });
  beforeEach(async () => {
    reader = await buildReader(db);
  });
  const door: Door = {
    context,
    server: () => server,
    token: () => reader.token,
    siteCode: () => reader.site.code,
    read: (number = 1) => ({
      antenna: 1,
      tag: carTag(number),
      readAt: context.clock.now().toISOString(),
    }),
    send: (body, type = 'application/json') =>
      request(server)
        .post('/api/ingest/reads')
        .auth(reader.token, { type: 'bearer' })
        .set('Content-Type', type)
        .serialize((sent: string) => sent)
        .send(body),
    head: (...headers) =>
      [
        'POST /api/ingest/reads HTTP/1.1',
        'Host: reader',
        `Authorization: Bearer ${reader.token}`,
        'Content-Type: application/json',
        ...headers,
        '\r\n',
      ].join('\r\n'),
    connect: async () => {
      const socket = await RawSocket.connect((server.address() as AddressInfo).port);
      sockets.push(socket);
      return socket;
    },
  };
  afterEach(async () => {
    await expectNextGood(door);
    for (const socket of sockets.splice(0)) socket.destroy();
  });
  afterAll(async () => {
    server.close();
    server.closeAllConnections();
    await once(server, 'close');
  });
  return door;
}

async function expectNextGood(door: Door): Promise<void> {
  const body = JSON.stringify({ reads: [door.read(900_001), door.read(900_002)] });
  const first = await door.send(body);
  expect({ status: first.status, ...(first.body as object) }).toMatchObject({
    status: 200,
    accepted: 2,
  });
  const again = await door.send(body);
  expect(again.body).toMatchObject({ accepted: 0, duplicates: 2 });
}

/** Fails unless the answer is a problem document of this status, and nothing else. */
export function expectProblem(
  answer: { status: number; headers: Record<string, string>; body: unknown },
  status: number,
): void {
  expect({ status: answer.status, body: answer.body }).toMatchObject({ status, body: { status } });
  expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
  expect(problemSchema.safeParse(answer.body).error).toBeUndefined();
}
