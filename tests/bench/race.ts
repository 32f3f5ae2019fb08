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
  /** Median processor seconds. */
  cpu: number;
}

/** Seconds of one repeat by the clock, and of the processor. */
type Sample = [wall: number, cpu: number];

export interface Race {
  task: Task;
  cores: number;
  ours: Times;
  twin: Times;
  /** How many times faster ours is, by the clock and by the processor time used. */
  ratio: number;
  cpuRatio: number;
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

function timesOf(command: string, args: string[]): Promise<Sample[]> {
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
      else resolve((JSON.parse(text) as { times: Sample[] }).times);
    });
  });
}

function summary(samples: Sample[]): Times {
  const quantile = (share: number, which: 0 | 1) => {
    const sorted = samples.map((sample) => sample[which]).sort((a, b) => a - b);
    return sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))];
  };
  const spread = (quantile(0.75, 0) - quantile(0.25, 0)) / 2;
  return { median: quantile(0.5, 0), spread, cpu: quantile(0.5, 1) };
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
    const ratio = ofTwin.median / ofOurs.median;
    const cpuRatio = ofTwin.cpu / ofOurs.cpu;
    return { task, cores, ours: ofOurs, twin: ofTwin, ratio, cpuRatio };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
