import { createHash } from 'node:crypto';
import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible';
import { formatCount } from '$lib/model/format';
import { pool } from '../database';

const minute = 60;

// An address may be a whole laboratory behind one router, an account is one person.
const limits = {
  'sign-in-account': { points: 8, duration: 15 * minute },
  'sign-in-address': { points: 40, duration: 15 * minute },
  'reset-account': { points: 5, duration: 60 * minute },
  'reset-address': { points: 20, duration: 60 * minute },
  'invite-team': { points: 60, duration: 60 * minute },
} as const;

export type LimitName = keyof typeof limits;

function limiter(name: LimitName): RateLimiterPostgres {
  return new RateLimiterPostgres({
    storeClient: pool,
    tableName: 'rate_limit',
    tableCreated: true,
    keyPrefix: name,
    ...limits[name],
  });
}

const limiters = new Map((Object.keys(limits) as LimitName[]).map((name) => [name, limiter(name)]));

/** Hashed, so that keys have one length and the table keeps no mail addresses. */
const keyOf = (subject: string): string => createHash('sha256').update(subject).digest('hex');

/** Counts one attempt. Returns how many seconds to wait when it is one too many, else 0. */
export async function countAttempt(name: LimitName, subject: string): Promise<number> {
  try {
    await limiters.get(name)!.consume(keyOf(subject));
    return 0;
  } catch (refusal) {
    if (refusal instanceof RateLimiterRes) return Math.ceil(refusal.msBeforeNext / 1000);
    throw refusal;
  }
}

/** A success shows that the attempts so far were the person's own. */
export async function forgetAttempts(name: LimitName, subject: string): Promise<void> {
  await limiters.get(name)!.delete(keyOf(subject));
}

/** Takes one attempt back; the others from there still count. */
export async function takeBackAttempt(name: LimitName, subject: string): Promise<void> {
  await limiters.get(name)!.reward(keyOf(subject));
}

export function waitMessage(seconds: number): string {
  const wait =
    seconds < 60 ? formatCount(seconds, 'second') : formatCount(Math.ceil(seconds / 60), 'minute');
  return `Too many attempts. Try again in ${wait}.`;
}
