import http from 'node:http';
import { PASSWORD } from '../../tests/support/factories.js';
import type { Portal } from './portal.js';

interface Wanted {
  /** The last read of the car's crossing, ms. */
  readAt: number;
  /** When the door had answered, by performance.now(); null: not yet. */
  acknowledgedAt: number | null;
}

/**
 * A client as the browser is one: signed in, its event stream open, asking for a car when it is
 * told that the car has changed.
 */
export class OpenClient {
  /** Milliseconds from acknowledgement to the answer that showed the read. */
  readonly delays: number[] = [];
  /** Times the stream said that too much had changed to name it. */
  resets = 0;
  private readonly wanted = new Map<string, Wanted>();
  private readonly agent = new http.Agent({ keepAlive: true });
  private stream: http.IncomingMessage | null = null;
  private fault: Error | null = null;

  private constructor(
    private readonly port: number,
    private readonly cookie: string,
  ) {}

  static async open({ port, email }: Portal): Promise<OpenClient> {
    const answer = await fetch(`http://127.0.0.1:${port}/api/session`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json' },
      body: JSON.stringify({ email, password: PASSWORD }),
    });
    if (!answer.ok) throw new Error(`Nobody could sign in: ${await answer.text()}`);
    const cookie = (answer.headers.get('set-cookie') ?? '').split(';')[0] ?? '';
    const client = new OpenClient(port, cookie);
    await client.listen();
    return client;
  }

  get waiting(): number {
    return this.wanted.size;
  }

  /** Wants to see this crossing; to be called before its reads are sent. */
  expect(unit: string, readAt: number): void {
    this.wanted.set(unit, { readAt, acknowledgedAt: null });
  }

  acknowledged(unit: string): void {
    const wanted = this.wanted.get(unit);
    if (wanted) wanted.acknowledgedAt = performance.now();
  }

  /** Forgets what was measured so far; what is under way still counts. */
  startAnew(): void {
    this.delays.length = 0;
    this.resets = 0;
  }

  throwFault(): void {
    if (this.fault) throw this.fault;
  }

  close(): void {
    this.stream?.destroy();
    this.agent.destroy();
  }

  private async listen(): Promise<void> {
    this.stream = await this.get('/api/events');
    let text = '';
    this.stream.on('data', (chunk: Buffer) => {
      text += chunk.toString();
      const events = text.split('\n\n');
      text = events.pop() ?? '';
      for (const event of events) this.take(event);
    });
    this.stream.on('error', () => undefined);
  }

  private take(event: string): void {
    const field = (name: string) => new RegExp(`^${name}: ?(.*)$`, 'm').exec(event)?.[1] ?? '';
    if (field('event') === 'reset') {
      this.resets += 1;
      this.lookAt([...this.wanted.keys()]);
    }
    if (field('event') !== 'changed') return;
    const { unitIds } = JSON.parse(field('data')) as { unitIds: string[] };
    this.lookAt(unitIds.filter((unit) => this.wanted.has(unit)));
  }

  private lookAt(units: readonly string[]): void {
    for (const unit of units) {
      this.look(unit).catch((error: unknown) => (this.fault ??= error as Error));
    }
  }

  private async look(unit: string): Promise<void> {
    const response = await this.get(`/api/equipment/${unit}`);
    let body = '';
    for await (const chunk of response) body += String(chunk);
    const { data } = JSON.parse(body) as { data: { lastSeen: { at: string } | null } };
    const wanted = this.wanted.get(unit);
    if (!wanted || Date.parse(data.lastSeen?.at ?? '') < wanted.readAt) return;
    this.wanted.delete(unit);
    const now = performance.now();
    this.delays.push(now - Math.min(wanted.acknowledgedAt ?? now, now));
  }

  private get(path: string): Promise<http.IncomingMessage> {
    const headers = { Cookie: this.cookie };
    const agent = path === '/api/events' ? undefined : this.agent;
    return new Promise((resolve, reject) => {
      http
        .get({ host: '127.0.0.1', port: this.port, path, headers, agent }, (response) => {
          if (response.statusCode === 200) resolve(response);
          else reject(new Error(`${path} answered ${response.statusCode}`));
        })
        .on('error', reject);
    });
  }
}
