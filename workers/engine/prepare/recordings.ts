import { PlanError } from '../errors';
import type { Plan } from '../plan';
import type { ChannelFacts, RecordingFacts } from '../types';

/** The recording's facts, or an error that names the file and what is wrong. */
export function recordingOf(
  plan: Plan,
  recordings: RecordingFacts[],
  sha256: string,
): RecordingFacts {
  const name = plan.recordings.find((recording) => recording.sha256 === sha256)?.name;
  const found = recordings.find((recording) => recording.sha256 === sha256);
  if (found && name !== undefined) return found;
  throw new PlanError(
    'recordings',
    name !== undefined
      ? `The recording ${name} is not here: open or upload it, or take it out of the plan.`
      : `A rule asks for a recording (${sha256.slice(0, 8)}…) that the plan does not list: choose it again.`,
  );
}

/** The facts of the plan's recordings, in the plan's order. */
export function planRecordings(plan: Plan, recordings: RecordingFacts[]): RecordingFacts[] {
  return plan.recordings.map(({ sha256 }) => recordingOf(plan, recordings, sha256));
}

/**
 * Indices of `sites` among the recording's channels.
 * @throws PlanError naming the sites that are missing or stand there twice.
 */
export function channelIndices(
  recording: RecordingFacts,
  sites: string[],
  field: string,
): Int32Array {
  const at = new Map<string, number[]>();
  recording.channels.forEach((channel, i) => {
    at.set(channel.site, [...(at.get(channel.site) ?? []), i]);
  });
  const missing = sites.filter((site) => !at.has(site));
  if (missing.length > 0) {
    throw new PlanError(
      field,
      `${recording.name} has no ${listed(missing)}: leave ${missing.length > 1 ? 'these sites' : 'this site'} out, or the recording.`,
    );
  }
  const twice = sites.filter((site) => at.get(site)!.length > 1);
  if (twice.length > 0) {
    throw new PlanError(
      field,
      `${recording.name} has more than one channel for ${listed(twice)}: leave ${twice.length > 1 ? 'these sites' : 'this site'} out, or mend the labels with a channels.tsv.`,
    );
  }
  return Int32Array.from(sites, (site) => at.get(site)![0]);
}

/** Sites whose samples a plan needs: the analysed ones and the named reference's. */
export function sitesRead(plan: Plan): string[] {
  const { reference } = plan.epoch;
  const extra = reference.kind === 'channels' ? reference.sites : [];
  return [...new Set([...plan.sites, ...extra])];
}

/**
 * The one sampling rate of all channels that the plan reads, hertz.
 * @throws PlanError naming the channels that differ from the commonest rate.
 */
export function commonRate(plan: Plan, recordings: RecordingFacts[]): number {
  const channels = planRecordings(plan, recordings).flatMap((recording) => {
    channelIndices(recording, plan.sites, 'sites');
    const { reference } = plan.epoch;
    if (reference.kind === 'channels') {
      channelIndices(recording, reference.sites, 'epoch.reference');
    }
    const indices = channelIndices(recording, sitesRead(plan), 'sites');
    return Array.from(indices, (i) => ({ recording, channel: recording.channels[i] }));
  });
  const counts = new Map<number, number>();
  for (const { channel } of channels) {
    counts.set(channel.samplingRateHz, (counts.get(channel.samplingRateHz) ?? 0) + 1);
  }
  const [rate] = [...counts].reduce((best, entry) => (entry[1] > best[1] ? entry : best));
  const odd = channels.filter(({ channel }) => channel.samplingRateHz !== rate);
  if (odd.length > 0) {
    throw new PlanError(
      'sites',
      `All sites of a plan need one sampling rate. Most have ${rate} Hz, but not ${listed(odd.map(described))}: leave them out.`,
    );
  }
  return rate;
}

function described({
  recording,
  channel,
}: {
  recording: RecordingFacts;
  channel: ChannelFacts;
}): string {
  return `${channel.site} (${channel.samplingRateHz} Hz in ${recording.name})`;
}

/** "F3", "F3 and F4", "F3, F4 and 12 more". */
export function listed(names: string[], most = 6): string {
  if (names.length > most) {
    const shown = names.slice(0, most - 1);
    return `${shown.join(', ')} and ${names.length - shown.length} more`;
  }
  return names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`;
}
