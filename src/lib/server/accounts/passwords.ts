import { hash, verify } from '@node-rs/argon2';

// Argon2id is the package's default. Costs: 19 MiB, 2 passes, 1 lane, the least that the OWASP
// Password Storage Cheat Sheet recommends for it (stated from memory).
const costs = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export function hashPassword(password: string): Promise<string> {
  return hash(password, costs);
}

/** Of a random password that nobody knows: what unknown mail addresses are checked against. */
const nobodysHash = hashPassword(crypto.randomUUID());

/**
 * Whether the password is the hashed one. Without a hash the same work is done in vain, so that
 * the time of the answer does not tell which mail addresses have an account.
 */
export async function passwordMatches(
  passwordHash: string | undefined,
  password: string,
): Promise<boolean> {
  const matches = await verify(passwordHash ?? (await nobodysHash), password);
  return passwordHash !== undefined && matches;
}
