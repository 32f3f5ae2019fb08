import nodemailer from 'nodemailer';
import { config } from '../config';
import { fakeSmtpUrl } from './fake-server';

export interface Mail {
  to: string;
  subject: string;
  text: string;
  html: string;
}

/**
 * Kept mails may be read by anyone who reaches the server: only where nothing in them is real
 * and none of them leaves the machine.
 */
export const mailPageIsOpen =
  config.smtpUrl === undefined && (config.mode === 'demo' || config.mode === 'development');

/** Hands the mail to the mail server, or throws: the caller says what that means for its work. */
export async function sendMail(mail: Mail): Promise<void> {
  const url = config.smtpUrl ?? (await fakeSmtpUrl());
  const transport = nodemailer.createTransport({
    url,
    connectionTimeout: 10_000,
    greetingTimeout: 10_000,
    socketTimeout: 20_000,
  });
  try {
    await transport.sendMail({ from: config.mailFrom, ...mail });
  } finally {
    transport.close();
  }
}
