import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { readF64, type Task } from './task';

const here = path.dirname(fileURLToPath(import.meta.url));
/** Debian's Python, which has Debian's SciPy; another may come first on the path. */
const python = '/usr/bin/python3';

export interface Times {
  /** Median seconds of one repeat, and half the distance between the quartiles. */
  median: number;
  spread: number;
}

export interface Race {
  task: Task;
  cores: number;
  ours: Times;
  twin: Times;
  /** How many times faster ours is. */
  ratio: number;
}

/** Environment of both sides: one thread each; BLAS may choose its own kernels. */
function environment(): NodeJS.ProcessEnv {
  const env: NodeJS.ProcessEnv = {
    ...process.env,
    OPENBLAS_NUM_THREADS: '1',
    OMP_NUM_THREADS: '1',
  };
  // Where they are set they force kernels of an older machine, which would handicap the twin.
  delete env.OPENBLAS_CORETYPE;
  delete env.OPENBLAS_L2_SIZE;
  return env;
}

function timesOf(command: string, args: string[]): Promise<number[]> {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, {
      env: environment(),
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    let text = '';
    child.stdout.on('data', (chunk) => (text += String(chunk)));
    child.once('error', reject);
    child.once('exit', (code) => {
      if (code !== 0) reject(new Error(`${command} ${args.join(' ')} ended with ${code}`));
      else resolve((JSON.parse(text) as { times: number[] }).times);
    });
  });
}

function summary(times: number[]): Times {
  const sorted = [...times].sort((a, b) => a - b);
  const at = (share: number) =>
    sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))];
  return { median: at(0.5), spread: (at(0.75) - at(0.25)) / 2 };
}

/** The same task by both sides, one after the other, with as many processes each as `cores`. */
export async function race(task: Task, index: number, cores: number): Promise<Race> {
  const folder = mkdtempSync(path.join(tmpdir(), 'nullwright-bench-'));
  try {
    task.prepare(folder);
    const repeats = String(task.repeats);
    const copies = Array.from({ length: cores }, (_, i) => i);
    const ours = [path.join(here, 'ours.ts'), String(index), folder, repeats];
    const twin = [path.join(here, 'twins', task.twin), folder, repeats];
    const run = async (command: string, args: string[]) =>
      summary((await Promise.all(copies.map(() => timesOf(command, args)))).flat());
    const ofTwin = await run(python, twin);
    const ofOurs = await run(process.execPath, ['--import', 'tsx', ...ours]);
    task.compare(readF64(folder, 'ours.f64'), readF64(folder, 'twin.f64'));
    return { task, cores, ours: ofOurs, twin: ofTwin, ratio: ofTwin.median / ofOurs.median };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
