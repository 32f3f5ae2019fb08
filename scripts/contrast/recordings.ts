import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import path from 'node:path';
import {
  blankIdentification,
  EdfError,
  factsOf,
  openEdf,
  parseChannels,
  parseElectrodes,
  parseEvents,
  SidecarError,
  type Plan,
  type RecordingFacts,
  type Sidecars,
} from '$engine';
import { fit, kindOf, type SidecarKind } from '$lib/model/bids-names';
import { storedBytes } from '$lib/server/recordings/blanked-stream';
import { openFileSource } from '$workers/file-source';
import { fileProblem } from './file-problem';
import { InputError } from './input-error';

export interface ReadSidecar {
  kind: SidecarKind;
  name: string;
  sha256: string;
}

/** A recording of the plan, found among the files given. */
export interface MatchedRecording {
  facts: RecordingFacts;
  path: string;
  /** True where the plan's copy is this file with its identifying header fields blanked. */
  blanked: boolean;
  sidecars: ReadSidecar[];
  notices: string[];
}

/** Bytes at the front of a file that hold the identifying fields. */
const headBytes = 256;

/**
 * The plan's recordings in its order, each matched to one of the files by its SHA-256.
 * @throws InputError for a file that cannot be read or is not of the plan, and for a recording of
 * the plan that no file holds.
 */
export async function matchRecordings(plan: Plan, files: string[]): Promise<MatchedRecording[]> {
  const found = new Map<string, MatchedRecording>();
  for (const file of files) {
    const { sha256, blanked } = await hashIn(plan, file);
    const same = found.get(sha256);
    if (same) {
      throw new InputError(`--recording ${file}: holds the same as ${same.path}; give it once.`);
    }
    found.set(sha256, { ...(await describe(file, sha256)), path: path.resolve(file), blanked });
  }
  return plan.recordings.map(({ sha256, name }) => {
    const match = found.get(sha256);
    if (match) return match;
    throw new InputError(
      `--recording: the plan's recording ${name} (SHA-256 ${sha256.slice(0, 12)}…) is not among the files; give it too.`,
    );
  });
}

async function hashIn(plan: Plan, file: string): Promise<{ sha256: string; blanked: boolean }> {
  const { whole, content } = await hashesOf(file);
  const named = new Set(plan.recordings.map(({ sha256 }) => sha256));
  if (named.has(whole)) return { sha256: whole, blanked: false };
  if (named.has(content)) return { sha256: content, blanked: true };
  const wanted = plan.recordings
    .map(({ name, sha256 }) => `${name} (${sha256.slice(0, 12)}…)`)
    .join(', ');
  throw new InputError(
    `--recording ${file}: its SHA-256 is ${whole}, the plan names ${wanted}; give the file the plan was made for.`,
  );
}

/** SHA-256 of the file as it is, and with its identifying header fields blanked. */
async function hashesOf(file: string): Promise<{ whole: string; content: string }> {
  try {
    const { source, close } = await openFileSource(file);
    const head = await source.read(0, Math.min(headBytes, source.size)).finally(close);
    if (head.length < headBytes) {
      throw new InputError(`--recording ${file}: has ${head.length} bytes and is no EDF file.`);
    }
    const { bytes, contentSha256 } = storedBytes(file, blankIdentification(head), true);
    const whole = createHash('sha256');
    for await (const chunk of bytes) whole.update(chunk as Uint8Array);
    return { whole: whole.digest('hex'), content: contentSha256() };
  } catch (reason) {
    if (reason instanceof InputError) throw reason;
    throw fileProblem('--recording', file, reason);
  }
}

async function describe(file: string, sha256: string) {
  const name = path.basename(file);
  const sidecars = await sidecarsOf(file);
  const { source, close } = await openFileSource(file);
  try {
    const identity = { sha256, name };
    const { facts, notices } = await factsOf(await openEdf(source), identity, sidecars.parsed);
    return { facts, sidecars: sidecars.read, notices: notices.map(({ message }) => message) };
  } catch (reason) {
    if (!(reason instanceof EdfError)) throw reason;
    throw new InputError(
      `--recording ${file}: cannot be read as EDF: ${reason.message}. Export it again from its source.`,
    );
  } finally {
    await close();
  }
}

/** The sidecars beside a recording whose names fit it best, one of each kind. */
async function sidecarsOf(file: string): Promise<{ parsed: Sidecars; read: ReadSidecar[] }> {
  const folder = path.dirname(file);
  const names = (await readdir(folder)).sort();
  const parsed: Sidecars = {};
  const read: ReadSidecar[] = [];
  for (const kind of ['events', 'channels', 'electrodes'] as const) {
    const name = bestFit(names, kind, path.basename(file));
    if (name === null) continue;
    const bytes = await readFile(path.join(folder, name)).catch((reason: unknown) => {
      throw fileProblem('--recording', path.join(folder, name), reason);
    });
    try {
      if (kind === 'events') parsed.events = parseEvents(name, bytes);
      if (kind === 'channels') parsed.channels = parseChannels(name, bytes);
      if (kind === 'electrodes') parsed.electrodes = parseElectrodes(name, bytes);
    } catch (reason) {
      if (reason instanceof SidecarError) throw new InputError(reason.message);
      throw reason;
    }
    read.push({ kind, name, sha256: createHash('sha256').update(bytes).digest('hex') });
  }
  return { parsed, read };
}

function bestFit(names: string[], kind: SidecarKind, recording: string): string | null {
  let best: string | null = null;
  let bestScore = 0;
  for (const name of names) {
    const score = kindOf(name) === kind ? fit(name, recording) : null;
    if (score === null || score <= bestScore) continue;
    best = name;
    bestScore = score;
  }
  return best;
}
