import { readdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import { type AddressObject, simpleParser } from 'mailparser';
import { mailFolder } from './fake-server';

export interface KeptMail {
  id: string;
  to: string;
  subject: string;
  sentAt: Date | null;
  text: string;
}

/** What the fake mail server kept, newest first. */
export async function listKeptMails(limit = 50): Promise<KeptMail[]> {
  const names = await namesIn(mailFolder);
  const newest = names
    .filter((name) => name.endsWith('.eml'))
    .sort()
    .reverse()
    .slice(0, limit);
  return Promise.all(newest.map(readMail));
}

async function namesIn(folder: string): Promise<string[]> {
  try {
    return await readdir(folder);
  } catch (problem) {
    // No mail was sent yet.
    if ((problem as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw problem;
  }
}

async function readMail(name: string): Promise<KeptMail> {
  const mail = await simpleParser(await readFile(path.join(mailFolder, name)));
  return {
    id: path.basename(name, '.eml'),
    to: addresses(mail.to),
    subject: mail.subject ?? '',
    sentAt: mail.date ?? null,
    text: mail.text ?? '',
  };
}

function addresses(to: AddressObject | AddressObject[] | undefined): string {
  return [to ?? []]
    .flat()
    .map((one) => one.text)
    .join(', ');
}
