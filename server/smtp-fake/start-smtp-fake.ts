import { randomBytes } from 'node:crypto';
import { mkdir, rename, writeFile } from 'node:fs/promises';
import type { AddressInfo } from 'node:net';
import path from 'node:path';
import { buffer } from 'node:stream/consumers';
import { SMTPServer } from 'smtp-server';
import { systemClock, type Clock } from '../lib/clock.js';

const MOST_BYTES = 5_000_000;

export interface SmtpFakeOptions {
  /** 0: any free port. */
  port: number;
  /** Where each mail is kept as one `.eml` file; made when it is not there. */
  directory: string;
  host?: string;
  clock?: Clock;
}

/** A mail server that keeps what it is given and sends nothing on. */
export interface SmtpFake {
  port: number;
  /** `smtp://` address that a transport takes. */
  url: string;
  directory: string;
  /** Answers the next `times` mails with `code` and keeps none of them. */
  refuse(times: number, code?: number): void;
  /** Keeps the next `times` mails but cuts the line before it answers. */
  cutAfterData(times: number): void;
  close(): Promise<void>;
}

/** Starts the fake on loopback and waits until it listens. */
export async function startSmtpFake(options: SmtpFakeOptions): Promise<SmtpFake> {
  const { directory, host = '127.0.0.1', clock = systemClock } = options;
  await mkdir(directory, { recursive: true, mode: 0o700 });
  const trouble = { refusals: 0, code: 451, cuts: 0 };
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    disableReverseLookup: true,
    size: MOST_BYTES,
    closeTimeout: 500,
    onData(stream, session, answer) {
      const take = async () => {
        const mail = await buffer(stream);
        if (trouble.refusals > 0) {
          trouble.refusals -= 1;
          throw Object.assign(new Error('Told to refuse'), { responseCode: trouble.code });
        }
        await keep(directory, clock.now(), mail);
        if (trouble.cuts === 0) return answer();
        trouble.cuts -= 1;
        cutLine(server, session.id);
      };
      take().catch((error: Error) => answer(error));
    },
  });
  // A client that drops the line is ordinary here; without a handler it would end the process.
  server.on('error', () => undefined);
  const port = await listen(server, options.port, host);
  return {
    port,
    url: `smtp://${host}:${port}`,
    directory,
    refuse: (times, code = 451) => Object.assign(trouble, { refusals: times, code }),
    cutAfterData: (times) => Object.assign(trouble, { cuts: times }),
    close: () => new Promise((resolve) => server.close(() => resolve())),
  };
}

function listen(server: SMTPServer, port: number, host: string): Promise<number> {
  return new Promise((resolve, reject) => {
    server.server.once('error', reject);
    server.listen(port, host, () => {
      server.server.off('error', reject);
      resolve((server.server.address() as AddressInfo).port);
    });
  });
}

/** Whole or not at all: readers of the directory look only at `.eml`. */
async function keep(directory: string, at: Date, mail: Buffer): Promise<void> {
  const name = `${String(at.getTime()).padStart(13, '0')}-${randomBytes(6).toString('hex')}`;
  const file = path.join(directory, `${name}.eml`);
  await writeFile(`${file}.part`, mail, { mode: 0o600 });
  await rename(`${file}.part`, file);
}

function cutLine(server: SMTPServer, sessionId: string): void {
  for (const connection of server.connections) {
    if (connection.session.id === sessionId) connection._socket.destroy();
  }
}
