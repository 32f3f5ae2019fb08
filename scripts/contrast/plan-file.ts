import { readFile } from 'node:fs/promises';
import { planHash, planSchema, type Plan } from '$engine';
import { issuesOf } from '$lib/model/plan-issues';
import { fileProblem } from './file-problem';
import { InputError } from './input-error';

export interface GivenPlan {
  /** As it is run: with the seed of the command line, if there is one. */
  plan: Plan;
  hash: string;
  /** What the file said where the command line's seed took its place. */
  replaced: { seed: string; planHash: string } | null;
}

/** @throws InputError naming the field, its value and the remedy. */
export async function readPlan(file: string, seed: string | null): Promise<GivenPlan> {
  const plan = parsePlan(file, await readText(file));
  const hash = await planHash(plan);
  if (seed === null || seed === plan.test.seed) return { plan, hash, replaced: null };
  const changed = { ...plan, test: { ...plan.test, seed } };
  return {
    plan: changed,
    hash: await planHash(changed),
    replaced: { seed: plan.test.seed, planHash: hash },
  };
}

async function readText(file: string): Promise<string> {
  try {
    return await readFile(file, 'utf8');
  } catch (reason) {
    throw fileProblem('--plan', file, reason);
  }
}

export function parsePlan(file: string, text: string): Plan {
  let body: unknown;
  try {
    body = JSON.parse(text.replace(/^\uFEFF/, ''));
  } catch (reason) {
    const said = reason instanceof Error ? reason.message.replace(/\s+/g, ' ') : '';
    throw new InputError(`--plan ${file}: is no JSON (${said}). Mend it, or download it again.`);
  }
  const parsed = planSchema.safeParse(body);
  if (parsed.success) return parsed.data;
  const [issue] = parsed.error.issues;
  const more = parsed.error.issues.length - 1;
  const rest = more > 0 ? ` ${more} more of its fields cannot be used.` : '';
  if (issue?.code === 'unrecognized_keys') {
    const names = [...issue.path, issue.keys.join(', ')].map(String).join('.');
    throw new InputError(`--plan ${file}, ${names}: is no field of a plan; take it out.${rest}`);
  }
  const [first] = issuesOf(parsed.error, body);
  const field = first?.field ? `, ${first.field}` : '';
  throw new InputError(`--plan ${file}${field}: ${first?.message ?? 'is no plan.'}${rest}`);
}
