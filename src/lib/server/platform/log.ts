import pino from 'pino';
import { logLevel } from './env';

/** Names of fields that must never reach a log, wherever they stand. */
const SECRET = [
  'password',
  'oneTimeCode',
  'oneTimeCodeSecret',
  'passwordHash',
  'token',
  'tokenHash',
  'sessionKey',
  'cookie',
  'authorization',
  'secret'
];

/** One event, one line of JSON on standard output; secrets are replaced. */
export const log = pino({
  level: logLevel(),
  base: null,
  timestamp: pino.stdTimeFunctions.isoTime,
  redact: { paths: SECRET.flatMap((name) => [name, `*.${name}`, `*.*.${name}`]), censor: '[kept out]' }
});
