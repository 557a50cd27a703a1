import { pino, type Logger } from 'pino';

/** Secrets that libraries put into what they log; never written. */
const secretPaths = [
  'req.headers.authorization',
  'req.headers.cookie',
  'res.headers["set-cookie"]',
  '*.password',
  '*.token',
  '*.databaseUrl',
  '*.sessionSecret',
];

/** One JSON line an event, on standard output. */
export function createLogger(level: 'silent' | 'info' | 'debug' = 'info'): Logger {
  return pino({
    level,
    base: null,
    timestamp: pino.stdTimeFunctions.isoTime,
    redact: { paths: secretPaths, censor: '[kept out]' },
  });
}
