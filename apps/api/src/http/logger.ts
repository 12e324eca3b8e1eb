import { type RequestHandler } from 'express';
import pino, { type DestinationStream, type Logger } from 'pino';
import { pinoHttp } from 'pino-http';

const SECRET = [
  'password',
  'token',
  'link',
  '*.password',
  '*.token',
  '*.link',
  'req.headers.authorization',
  'req.headers.cookie',
  'res.headers["set-cookie"]',
  // What a failing statement carried: hashes, sealed links, addresses.
  ...['err', 'err.parent', 'err.original'].flatMap((error) => [`${error}.sql`, `${error}.parameters`]),
];

/** One JSON line an event, on standard error: standard output is for the operator. Secrets are blanked. */
export function makeLogger(level: string, destination: DestinationStream = pino.destination(2)): Logger {
  return pino({ level, redact: { paths: SECRET, censor: '[withheld]' } }, destination);
}

/** Requests are logged at debug level; what fails on our side is logged where it fails. Query strings are left out. */
export function logRequests(logger: Logger): RequestHandler {
  return pinoHttp({
    logger,
    customLogLevel: () => 'debug',
    serializers: {
      req: (req: { method: string; url: string }) => ({ method: req.method, path: req.url.split('?')[0] }),
      res: (res: { statusCode: number }) => ({ status: res.statusCode }),
    },
  });
}
