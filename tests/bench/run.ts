/**
 * `npm run bench`: our kernels against NumPy and SciPy twins, on this machine, in this run; first one
 * process each, then one a core. `npm run bench -- --scale`: how cost and memory grow.
 * `npm run bench -- labels` runs the tasks whose twin has that name.
 */
import { writeFileSync } from 'node:fs';
import { availableParallelism, cpus, loadavg } from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { ensureKernels } from '../../scripts/lib/kernels.mjs';
import type { Race } from './race';

const file = path.join(path.dirname(fileURLToPath(import.meta.url)), 'RESULTS.md');
const wanted = process.argv.slice(2);

function row({ task, cores, ours, twin, ratio }: Race): string {
  const rate = (seconds: number) => ((cores * task.amount) / seconds).toPrecision(3);
  const spread = (part: { median: number; spread: number }) =>
    `± ${Math.round((100 * part.spread) / part.median)} %`;
  const cells = [
    `${task.id} ${task.name}`,
    String(cores),
    `${rate(ours.median)} ${spread(ours)}`,
    `${rate(twin.median)} ${spread(twin)}`,
    task.unit,
    ratio.toFixed(2),
    task.mustReach.toFixed(1),
    task.ambitious.toFixed(1),
    ratio >= task.ambitious ? 'ambitious' : ratio >= task.mustReach ? 'reached' : 'missed',
  ];
  return `| ${cells.join(' | ')} |`;
}

const head = [
  '| task | processes | ours | NumPy/SciPy | unit | times faster | must reach | ambitious | |',
  '| --- | --- | --- | --- | --- | --- | --- | --- | --- |',
];

function preamble(): string[] {
  const load = loadavg()[0].toFixed(1);
  return [
    '# Bench results',
    '',
    'Written by `npm run bench`. Medians over repeats, ± half the distance of the quartiles; both',
    'sides single-threaded in each process, and their results compared before a row is printed.',
    '',
    `Machine: ${cpus()[0].model.trim()}, ${availableParallelism()} cores, Node ${process.version};`,
    `load average at the start ${load} (above 0.5 other programs ran too).`,
    '',
  ];
}

async function races(): Promise<void> {
  const { race } = await import('./race');
  const { tasks } = await import('./tasks');
  const lines = preamble();
  for (const line of [...lines, ...head]) console.log(line);
  const rows: string[] = [];
  for (const cores of new Set([1, availableParallelism()])) {
    for (const [index, task] of tasks.entries()) {
      if (wanted.length > 0 && !wanted.includes(path.parse(task.twin).name)) continue;
      const text = row(await race(task, index, cores));
      rows.push(text);
      console.log(text);
    }
  }
  if (wanted.length === 0) writeFileSync(file, [...lines, ...head, ...rows, ''].join('\n'));
}

ensureKernels();
if (wanted[0] === '--scale') {
  const { scale } = await import('./scale');
  scale();
} else {
  await races();
}
