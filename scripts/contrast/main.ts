import { axesOf, planEpochs, PlanError } from '$engine';
import { formatCount, formatSeconds } from '$lib/model/format';
import { threadPool } from '$workers/run/thread-pool';
import { TooFewEpochsError, wholeRun, type WholeRun } from '$workers/run/whole-run';
import { examplePlan } from './example';
import { InputError } from './input-error';
import { parseCommand, type RunOptions } from './options';
import { checkOut, writeWhole } from './out-folder';
import { readPlan, type GivenPlan } from './plan-file';
import { ProgressLine } from './progress-line';
import { matchRecordings, type MatchedRecording } from './recordings';
import { usage } from './usage';
import { writeResult } from './write-result';

const exit = { done: 0, failed: 1, badInput: 2, interrupted: 130 } as const;

/** The command `contrast`: resolves with its exit code; `thread` is the bundled engine-thread. */
export async function main(args: string[], thread: URL): Promise<number> {
  const interruption = new AbortController();
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
    process.on(signal, () => interruption.abort());
  }
  try {
    const command = parseCommand(args);
    if (command.kind === 'help') process.stdout.write(usage);
    else if (command.kind === 'example') {
      process.stdout.write(`${JSON.stringify(examplePlan(), null, 2)}\n`);
    } else await run(command.options, thread, interruption.signal);
    return exit.done;
  } catch (reason) {
    if (interruption.signal.aborted) {
      process.stderr.write('contrast: interrupted; no result was written.\n');
      return exit.interrupted;
    }
    process.stderr.write(`contrast: ${oneLine(reason)}\n`);
    return isBadInput(reason) ? exit.badInput : exit.failed;
  }
}

async function run(options: RunOptions, thread: URL, signal: AbortSignal): Promise<void> {
  const begun = performance.now();
  const given = await readPlan(options.planFile, options.seed);
  await checkOut(options.out, options.overwrite);
  const recordings = await matchRecordings(given.plan, options.recordingFiles);
  signal.throwIfAborted();
  refuseMisfit(options.planFile, given, recordings);
  let finished: WholeRun | null = null;
  await writeWhole(options.out, options.overwrite, async (folder) => {
    finished = await compute(options, given, recordings, thread, signal);
    await writeResult(folder, given, recordings, finished);
    signal.throwIfAborted();
  });
  if (!options.quiet && finished) {
    process.stdout.write(closingLine(options.out, finished, (performance.now() - begun) / 1000));
  }
}

/** What the recordings' facts alone rule out is said before a thread is started. */
function refuseMisfit(file: string, { plan }: GivenPlan, recordings: MatchedRecording[]): void {
  const facts = recordings.map((recording) => recording.facts);
  try {
    axesOf(plan, facts);
    planEpochs(plan, facts);
  } catch (reason) {
    if (!(reason instanceof PlanError)) throw reason;
    throw new InputError(`--plan ${file}, ${reason.field}: ${reason.message}`);
  }
}

async function compute(
  options: RunOptions,
  { plan }: GivenPlan,
  recordings: MatchedRecording[],
  thread: URL,
  signal: AbortSignal,
): Promise<WholeRun> {
  const { permutations } = plan.test;
  const line = new ProgressLine(process.stderr, { permutations, quiet: options.quiet });
  const pool = threadPool(options.workers, thread);
  const stop = (): void => pool.end();
  signal.addEventListener('abort', stop);
  try {
    return await wholeRun(pool, plan, recordings, {
      onProgress: (stage, done, of) => line.update(stage, done, of),
    });
  } finally {
    signal.removeEventListener('abort', stop);
    pool.end();
    line.clear();
  }
}

function closingLine(out: string, { outcome, summary }: WholeRun, seconds: number): string {
  const [claim] = outcome.corrections;
  const edges = formatCount(claim?.edges.length ?? 0, 'edge');
  return `${edges} under ${claim?.id}, digest ${summary.digest.slice(0, 12)}, ${formatSeconds(seconds)}, in ${out}\n`;
}

/** Errors of the engine come back from a thread with their names, not their classes. */
const badInputNames = new Set([
  InputError.name,
  PlanError.name,
  TooFewEpochsError.name,
  'EdfError',
  'SidecarError',
]);

function isBadInput(reason: unknown): boolean {
  return reason instanceof Error && badInputNames.has(reason.name);
}

function oneLine(reason: unknown): string {
  const said = reason instanceof Error ? reason.message : String(reason);
  return said.replace(/\s*[\r\n]+\s*/g, ' ').trim();
}
