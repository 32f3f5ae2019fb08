import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { chromium } from 'playwright';
import { createServer } from 'vite';
import type { WholeRun } from './page';

declare global {
  interface Window {
    prepare(): Promise<void>;
    wholeRun(): Promise<WholeRun>;
  }
}

const root = fileURLToPath(new URL('../../..', import.meta.url));

/** Processes below another, itself left out. */
function below(parent: number): number[] {
  const parents = new Map<number, number>();
  for (const name of readdirSync('/proc')) {
    if (/^\d+$/.test(name)) parents.set(Number(name), Number(statOf(Number(name))[1]));
  }
  const under = (pid: number): boolean => {
    const of = parents.get(pid);
    return of !== undefined && (of === parent || under(of));
  };
  return [...parents.keys()].filter(under);
}

/** The fields of /proc/PID/stat after the name; none for a process that has ended. */
function statOf(pid: number): string[] {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return stat.slice(stat.lastIndexOf(')') + 2).split(' ');
  } catch {
    return [];
  }
}

/** Memory of all processes below this one, shared pages by their share, megabytes. */
function megabytesBelow(): number {
  let sum = 0;
  for (const pid of below(process.pid)) {
    try {
      const rollup = readFileSync(`/proc/${pid}/smaps_rollup`, 'utf8');
      sum += Number(/^Pss:\s+(\d+) kB/m.exec(rollup)?.[1] ?? 0) / 1000;
    } catch {
      // It ended in the meantime.
    }
  }
  return sum;
}

const ticksPerSecond = 100;

/** Processor time that the processes below this one have used, seconds. */
function cpuSecondsBelow(): number {
  return below(process.pid).reduce((sum, pid) => {
    const stat = statOf(pid);
    return sum + (Number(stat[11] ?? 0) + Number(stat[12] ?? 0)) / ticksPerSecond;
  }, 0);
}

/** The whole run of the README's promise in Chromium on two workers. Throws without a browser. */
export async function measureInChromium(): Promise<
  WholeRun & { megabytes: number; cpuSeconds: number }
> {
  const server = await createServer({
    root,
    configFile: false,
    logLevel: 'error',
    server: {
      port: 0,
      host: '127.0.0.1',
      headers: {
        'Cross-Origin-Opener-Policy': 'same-origin',
        'Cross-Origin-Embedder-Policy': 'require-corp',
      },
    },
    worker: { format: 'es' },
  });
  await server.listen();
  const browser = await chromium.launch({
    executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
    args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking'],
  });
  try {
    const page = await browser.newPage();
    page.on('pageerror', (error) => console.error(error.message));
    const address = server.resolvedUrls?.local[0] ?? '';
    await page.goto(`${address}${path.posix.join('tests', 'bench', 'chromium', 'index.html')}`);
    await page.waitForFunction(() => 'wholeRun' in window);
    await page.evaluate(() => window.prepare());
    let megabytes = 0;
    const timer = setInterval(() => (megabytes = Math.max(megabytes, megabytesBelow())), 2000);
    const before = cpuSecondsBelow();
    const result = await page.evaluate(() => window.wholeRun());
    const cpuSeconds = cpuSecondsBelow() - before;
    clearInterval(timer);
    return { ...result, megabytes: Math.max(megabytes, megabytesBelow()), cpuSeconds };
  } finally {
    await browser.close();
    await server.close();
  }
}
