import { error } from '@sveltejs/kit';
import type { z } from 'zod';

/** A request's JSON body, parsed by a schema; 400 names the first field that does not fit. */
export async function readJson<Schema extends z.ZodType>(
  request: Request,
  schema: Schema,
): Promise<z.infer<Schema>> {
  let body: unknown;
  try {
    body = await request.json();
  } catch {
    error(400, { code: 'not-json', message: 'The request body is not valid JSON.' });
  }
  const parsed = schema.safeParse(body);
  if (parsed.success) return parsed.data;
  const issue = parsed.error.issues[0];
  const field = issue?.path.join('.') || 'body';
  error(400, { code: 'invalid', message: `${field}: ${issue?.message ?? 'is not valid'}` });
}
