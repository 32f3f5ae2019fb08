import { createHash, randomBytes } from 'node:crypto';

/** A secret for a cookie or a mail's link: 256 random bits. */
export function newToken(): string {
  return randomBytes(32).toString('base64url');
}

/**
 * What the database keeps of a token. The token is random over its whole length, so one round
 * of SHA-256 suffices: there is nothing to guess.
 */
export function hashToken(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}
