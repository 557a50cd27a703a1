import type { IncomingMessage } from 'node:http';
import { INGEST_BOUNDS } from '../contract/ingest.js';
import { invalid, timedOut, tooLarge, type Problem } from '../errors.js';

/**
 * The whole body. Throws 413 as soon as it is over `mostBytes`, 408 when nothing of it came for
 * `idleMs`, and what `count` throws when it is told of bytes; what is still on its way then is
 * thrown away.
 */
export function receiveBody(
  request: IncomingMessage,
  idleMs: number,
  mostBytes: number = INGEST_BOUNDS.bytes,
  count: (bytes: number) => void = () => undefined,
): Promise<Buffer> {
  const most = mostBytes < 1e6 ? `${mostBytes / 1e3} kB` : `${Math.floor(mostBytes / 1e6)} MB`;
  const tooLargeProblem = () => tooLarge(`A request holds at most ${most} here.`);
  if (Number(request.headers['content-length'] ?? 0) > mostBytes) {
    request.resume();
    return Promise.reject(tooLargeProblem());
  }
  const closedProblem = () => invalid('The connection closed within the body.');
  if (request.destroyed) return Promise.reject(closedProblem());
  return new Promise((resolve, reject) => {
    const chunks: Buffer[] = [];
    let bytes = 0;
    const refuse = (problem: Problem) => {
      stop();
      request.resume();
      reject(problem);
    };
    const timer = setTimeout(() => {
      refuse(timedOut('The rest of the body did not come.'));
    }, idleMs);
    const onData = (chunk: Buffer) => {
      timer.refresh();
      bytes += chunk.length;
      if (bytes > mostBytes) return refuse(tooLargeProblem());
      try {
        count(chunk.length);
      } catch (problem) {
        return refuse(problem as Problem);
      }
      chunks.push(chunk);
    };
    const onEnd = () => {
      stop();
      resolve(Buffer.concat(chunks));
    };
    const onClose = () => {
      refuse(closedProblem());
    };
    const stop = () => {
      clearTimeout(timer);
      request.off('data', onData).off('end', onEnd).off('close', onClose);
    };
    request.on('data', onData).on('end', onEnd).on('close', onClose);
  });
}
