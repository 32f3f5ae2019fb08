/**
 * `npm run bench`: our kernels against NumPy and SciPy twins, on this machine, in this run; first one
 * process each, then one a core. `npm run bench -- --scale`: how cost and memory grow.
 * `npm run bench -- --chromium`: the whole run in the browser alone.
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

function row({ task, cores, ours, twin, ratio, cpuRatio }: Race): string {
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
    cpuRatio.toFixed(2),
    task.mustReach.toFixed(1),
    task.ambitious.toFixed(1),
    ratio >= task.ambitious ? 'ambitious' : ratio >= task.mustReach ? 'reached' : 'missed',
  ];
  return `| ${cells.join(' | ')} |`;
}

const head = [
  '| task | processes | ours | NumPy/SciPy | unit | times faster | by processor time | must reach | ambitious | |',
  '| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |',
];

function preamble(): string[] {
  const load = loadavg()[0].toFixed(1);
  return [
    '# Bench results',
    '',
    'Written by `npm run bench`. Medians over repeats, ± half the distance of the quartiles; both',
    'sides single-threaded in each process, and their results compared before a row is printed. The',
    'ratio by processor time hardly depends on what else the machine does.',
    '',
    `Machine: ${cpus()[0].model.trim()}, ${availableParallelism()} cores, Node ${process.version};`,
    `load average at the start ${load} (above 0.5 other programs ran too).`,
    '',
  ];
}

/** 64 sites in the browser: the run that the README promises a time for. */
async function wholeRunInChromium(): Promise<string[]> {
  const { measureInChromium } = await import('./chromium/measure');
  const { seconds, cpuSeconds, longestMs, megabytes, pairs } = await measureInChromium();
  return [
    '',
    `Whole run in Chromium, two workers, ${pairs} pairs, 20 x 50 points, 100 + 100 epochs, 1000 label`,
    'permutations, z, maximum and cluster mass, after the phases are there:',
    `${seconds.toFixed(1)} s (at most 8, wished for 5), ${cpuSeconds.toFixed(1)} s of processor time; the page was busy for at most ${longestMs.toFixed(0)} ms`,
    `(at most 50); all of Chromium took ${megabytes.toFixed(0)} MB.`,
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
  if (wanted.length > 0) return;
  const browser = await wholeRunInChromium();
  for (const line of browser) console.log(line);
  writeFileSync(file, [...lines, ...head, ...rows, ...browser, ''].join('\n'));
}

ensureKernels();
if (wanted[0] === '--chromium') {
  for (const line of await wholeRunInChromium()) console.log(line);
} else if (wanted[0] === '--scale') {
  const { scale } = await import('./scale');
  scale();
} else {
  await races();
}
