import { spawn, type ChildProcess } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdtemp, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Plan } from '../../../workers/engine';
import { smallPlan, smallRecording } from '../run/small-run';

const script = fileURLToPath(new URL('../../../scripts/contrast.mjs', import.meta.url));

export interface Ended {
  code: number | null;
  stdout: string;
  stderr: string;
}

export function begin(args: string[]): { child: ChildProcess; ended: Promise<Ended> } {
  const child = spawn(process.execPath, [script, ...args]);
  let [stdout, stderr] = ['', ''];
  child.stdout.on('data', (chunk: Buffer) => (stdout += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (stderr += chunk.toString()));
  const ended = new Promise<Ended>((resolve, reject) => {
    child.on('error', reject);
    child.on('close', (code) => resolve({ code, stdout, stderr }));
  });
  return { child, ended };
}

/** Runs the command as a person does, to its end. */
export const contrast = (...args: string[]): Promise<Ended> => begin(args).ended;

export interface Desk {
  folder: string;
  at: (name: string) => string;
  recording: string;
  sha256: string;
  plan: Plan;
  /** Writes a plan file and answers its path. */
  planFile: (name: string, plan: unknown) => Promise<string>;
}

/** A folder of its own with the small recording and a plan over it. */
export async function openDesk(
  change: Partial<Plan> = {},
  bytes: Uint8Array = smallRecording(),
): Promise<Desk> {
  const folder = await mkdtemp(path.join(tmpdir(), 'nullwright-contrast-'));
  const at = (name: string): string => path.join(folder, name);
  const sha256 = createHash('sha256').update(bytes).digest('hex');
  await writeFile(at('rest.edf'), bytes);
  const plan = smallPlan(sha256, change);
  const planFile = async (name: string, body: unknown): Promise<string> => {
    await writeFile(at(name), typeof body === 'string' ? body : JSON.stringify(body));
    return at(name);
  };
  await planFile('plan.json', plan);
  return { folder, at, recording: at('rest.edf'), sha256, plan, planFile };
}
