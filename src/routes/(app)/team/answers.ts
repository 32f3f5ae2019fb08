import { error, fail } from '@sveltejs/kit';
import type { z } from 'zod';
import type { Outcome } from '$lib/server/accounts';

/** Values of buttons and lists, which a person cannot get wrong: a bad one is a 400 page. */
export async function readForm<T>(request: Request, schema: z.ZodType<T>): Promise<T> {
  const parsed = schema.safeParse(Object.fromEntries(await request.formData()));
  if (parsed.success) return parsed.data;
  const issue = parsed.error.issues[0];
  error(400, { code: 'invalid', message: `${issue?.path.join('.')}: ${issue?.message}` });
}

/** What an action without fields of its own says: what was done, or why not. */
export function answerFor(outcome: Outcome, done: string) {
  if (outcome.ok) return { done, problem: null };
  return fail(outcome.waitS ? 429 : 400, { done: null, problem: outcome.message });
}
