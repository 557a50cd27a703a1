import { createRequire } from 'node:module';
import { Worker } from 'node:worker_threads';

type Job = ['hash', string, number] | ['compare', string, string];
type Answer = { id: number; value?: string | boolean; fault?: string };
interface Waiting {
  resolve: (value: never) => void;
  reject: (error: Error) => void;
}

/** What the thread runs: bcryptjs costs tens of milliseconds that requests must not wait for. */
const program = `
  const { parentPort, workerData } = require('node:worker_threads');
  const bcrypt = require(workerData);
  parentPort.on('message', ({ id, job: [act, text, other] }) => {
    try {
      parentPort.postMessage({ id, value: bcrypt[act + 'Sync'](text, other) });
    } catch (error) {
      parentPort.postMessage({ id, fault: error.name });
    }
  });
`;

let thread: Worker | undefined;
let lastId = 0;
const waiting = new Map<number, Waiting>();

/** Hashes off the event loop, one at a time. */
export const bcryptHash = (password: string, cost: number) => run<string>(['hash', password, cost]);

/** Compares off the event loop, one at a time. */
export const bcryptCompare = (password: string, hash: string) =>
  run<boolean>(['compare', password, hash]);

function run<Value extends string | boolean>(job: Job): Promise<Value> {
  return new Promise<Value>((resolve, reject) => {
    lastId += 1;
    waiting.set(lastId, { resolve, reject });
    thread ??= startThread();
    thread.ref();
    thread.postMessage({ id: lastId, job });
  });
}

function startThread(): Worker {
  const path = createRequire(import.meta.url).resolve('bcryptjs');
  const worker = new Worker(program, { eval: true, workerData: path });
  worker.on('message', ({ id, value, fault }: Answer) => {
    const one = waiting.get(id);
    waiting.delete(id);
    if (waiting.size === 0) worker.unref();
    if (fault === undefined) one?.resolve(value as never);
    else one?.reject(new Error(`bcrypt failed: ${fault}`));
  });
  const lose = (error: Error) => {
    thread = undefined;
    for (const { reject } of waiting.values()) reject(error);
    waiting.clear();
  };
  worker.on('error', lose);
  worker.on('exit', (code) => lose(new Error(`The bcrypt thread ended with ${code}.`)));
  return worker;
}
