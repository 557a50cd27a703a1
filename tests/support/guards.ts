import net from 'node:net';
import { afterEach, beforeEach, expect } from 'vitest';

/**
 * A test fails for what nobody asked it about: noise on the console, and connections to
 * anything but this machine. (Rejections that nobody handles fail the run in vitest itself.)
 */
let noise: string[] = [];
let expected: RegExp[] = [];
let calls: string[] = [];

/** Says that this test makes the console say something like `pattern`, once or more. */
export function expectConsole(pattern: RegExp): void {
  expected.push(pattern);
}

beforeEach(() => {
  noise = [];
  expected = [];
  calls = [];
});

afterEach(() => {
  const unexpected = noise.filter((line) => !expected.some((pattern) => pattern.test(line)));
  const silent = expected.filter((pattern) => !noise.some((line) => pattern.test(line)));
  expect(unexpected, 'unexpected lines on the console').toEqual([]);
  expect(silent, 'announced lines that the console did not say').toEqual([]);
  expect(calls, 'connections to other machines').toEqual([]);
});

for (const level of ['error', 'warn'] as const) {
  console[level] = (...parts: unknown[]) => {
    noise.push(parts.map((part) => (part instanceof Error ? part.stack : String(part))).join(' '));
  };
}

type Connect = (this: net.Socket, ...parameters: unknown[]) => net.Socket;
const connect = net.Socket.prototype.connect as Connect;
const guarded: Connect = function (...parameters) {
  const host = hostOf(parameters);
  if (host === null || isLoopback(host)) return connect.apply(this, parameters);
  calls.push(host);
  process.nextTick(() => this.destroy(new Error(`Tests do not connect to ${host}.`)));
  return this;
};
net.Socket.prototype.connect = guarded;

/** The host a socket is told to connect to; null for a socket file. */
function hostOf(parameters: unknown[]): string | null {
  // Node's own callers hand over one array of already ordered arguments.
  const [first, second] = (Array.isArray(parameters[0]) ? parameters[0] : parameters) as unknown[];
  if (typeof first === 'string' && Number.isNaN(Number(first))) return null;
  if (typeof first !== 'object' || first === null) {
    return typeof second === 'string' ? second : 'localhost';
  }
  const options = first as { path?: string; host?: string };
  return options.path ? null : (options.host ?? 'localhost');
}

function isLoopback(host: string): boolean {
  return /^(localhost|127(\.\d+){3}|::1|\[::1\]|::ffff:127(\.\d+){3})$/.test(host);
}
