import { once } from 'node:events';
import net from 'node:net';

/** One answer as it came over the wire; header names in lower case. */
export interface RawAnswer {
  status: number;
  headers: Record<string, string>;
  body: Record<string, unknown>;
}

/** A client that says exactly what it is told, and takes the answers apart as they come. */
export class RawSocket {
  private received = Buffer.alloc(0);
  private isClosed = false;
  private wake = () => {};

  private constructor(private readonly socket: net.Socket) {
    socket.on('data', (chunk) => {
      this.received = Buffer.concat([this.received, chunk]);
      this.wake();
    });
    socket.on('error', () => undefined);
    socket.on('close', () => {
      this.isClosed = true;
      this.wake();
    });
  }

  static async connect(port: number): Promise<RawSocket> {
    const socket = net.connect(port, '127.0.0.1');
    await once(socket, 'connect');
    return new RawSocket(socket);
  }

  /** Sends bytes; done when they have left this process. */
  write(bytes: string | Buffer): Promise<void> {
    return new Promise((resolve) => {
      this.socket.write(bytes, () => resolve());
    });
  }

  /** Says that nothing more will come. */
  end(): void {
    this.socket.end();
  }

  /** Hangs up. */
  destroy(): void {
    this.socket.destroy();
  }

  /** The next answer; null when the connection closed before there was a whole one. */
  async answer(): Promise<RawAnswer | null> {
    for (;;) {
      const taken = takeAnswer(this.received);
      if (taken) {
        this.received = this.received.subarray(taken.bytes);
        return taken.answer;
      }
      if (this.isClosed) return null;
      await new Promise<void>((resolve) => {
        this.wake = resolve;
      });
    }
  }

  /** Everything that is answered until the server closes the connection. */
  async answersUntilClosed(): Promise<RawAnswer[]> {
    const answers: RawAnswer[] = [];
    for (;;) {
      const answer = await this.answer();
      if (!answer) return answers;
      answers.push(answer);
    }
  }
}

function takeAnswer(bytes: Buffer): { answer: RawAnswer; bytes: number } | null {
  const end = bytes.indexOf('\r\n\r\n');
  if (end === -1) return null;
  const [first = '', ...lines] = bytes.subarray(0, end).toString('latin1').split('\r\n');
  const headers = Object.fromEntries(
    lines.map((line) => {
      const colon = line.indexOf(':');
      return [line.slice(0, colon).toLowerCase(), line.slice(colon + 1).trim()];
    }),
  );
  const status = Number(first.split(' ')[1]);
  // The server itself, where it refuses a head, sends chunks: the empty one, and no other.
  const isChunked = headers['transfer-encoding'] === 'chunked';
  const length = isChunked ? '0\r\n\r\n'.length : Number(headers['content-length'] ?? 0);
  const whole = end + 4 + length;
  if (bytes.length < whole) return null;
  const text = bytes.subarray(end + 4, whole).toString();
  const isJson = /json/.test(headers['content-type'] ?? '');
  const body = isJson ? (JSON.parse(text) as Record<string, unknown>) : {};
  return { answer: { status, headers, body }, bytes: whole };
}
