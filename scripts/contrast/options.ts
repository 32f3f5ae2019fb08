import { availableParallelism } from 'node:os';
import { parseArgs } from 'node:util';
import { InputError } from './input-error';

export interface RunOptions {
  planFile: string;
  recordingFiles: string[];
  out: string;
  overwrite: boolean;
  workers: number;
  /** Replaces the plan's own. */
  seed: string | null;
  quiet: boolean;
}

export type Command = { kind: 'help' } | { kind: 'example' } | { kind: 'run'; options: RunOptions };

const mostWorkers = 64;
/** Each thread holds about 100 MB of tables; whoever wants more says so. */
const mostByDefault = 16;

/** What the arguments ask for. @throws InputError naming the option, its value and the remedy. */
export function parseCommand(args: string[]): Command {
  const given = parsed(args);
  if (given.help) return { kind: 'help' };
  if (given.example) return { kind: 'example' };
  const recordingFiles = given.recording ?? [];
  if (recordingFiles.length === 0) {
    throw new InputError('--recording is missing: name each EDF file of the plan (see --help).');
  }
  return {
    kind: 'run',
    options: {
      planFile: required('--plan', given.plan, "name the plan's JSON file"),
      recordingFiles,
      out: required('--out', given.out, 'name the folder for the result'),
      overwrite: given.overwrite ?? false,
      workers: workersOf(given.workers),
      seed: seedOf(given.seed),
      quiet: given.quiet ?? false,
    },
  };
}

function parsed(args: string[]) {
  try {
    const { values } = parseArgs({
      args,
      options: {
        plan: { type: 'string' },
        recording: { type: 'string', multiple: true },
        out: { type: 'string' },
        overwrite: { type: 'boolean' },
        workers: { type: 'string' },
        seed: { type: 'string' },
        quiet: { type: 'boolean' },
        example: { type: 'boolean' },
        help: { type: 'boolean', short: 'h' },
      },
    });
    return values;
  } catch (reason) {
    // parseArgs says what it does not know over several lines; its first sentence is enough.
    const said = reason instanceof Error ? reason.message.split(/\. |\n/)[0] : String(reason);
    throw new InputError(`${said}: see --help for the options there are.`);
  }
}

function required(name: string, value: string | undefined, remedy: string): string {
  if (value === undefined || value === '') {
    throw new InputError(`${name} is missing: ${remedy} (see --help).`);
  }
  return value;
}

function workersOf(text: string | undefined): number {
  if (text === undefined) return Math.min(mostByDefault, availableParallelism());
  const count = /^\d+$/.test(text) ? Number(text) : Number.NaN;
  if (count >= 1 && count <= mostWorkers) return count;
  throw new InputError(`--workers is "${text}": give a whole number from 1 to ${mostWorkers}.`);
}

function seedOf(text: string | undefined): string | null {
  if (text === undefined) return null;
  const seed = text.trim();
  if (seed.length >= 1 && seed.length <= 80) return seed;
  throw new InputError(`--seed has ${seed.length} characters: give a text of 1 to 80.`);
}
