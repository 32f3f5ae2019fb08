import pino from 'pino';
import { config } from './config';

/** One JSON line an event; never a recording's content, a password, a token or a mail's text. */
export const log = pino({ level: config.logLevel, base: null });
