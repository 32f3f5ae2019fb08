import { config } from '../config';

/** Kept mails may be read by anyone at the machine: only where nothing in them is real. */
export const mailPageIsOpen =
  config.smtpUrl === undefined && (config.mode === 'demo' || config.mode === 'development');
