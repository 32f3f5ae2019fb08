import type { ChannelFacts, EventFacts, RecordingFacts } from '../types';
import type { SidecarChannel, SidecarElectrode } from './bids';
import { guessChannelType } from './channel-type';
import type { EdfFile } from './edf';
import type { Notice } from './edf-error';
import type { EdfSignal } from './edf-signals';
import { projectElectrodes } from './electrodes';
import type { Position } from './positions';
import { positionOfSite, siteOf } from './sites';

/** What stands beside a recording; what is absent comes from the file itself. */
export interface Sidecars {
  events?: EventFacts[];
  channels?: SidecarChannel[];
  electrodes?: SidecarElectrode[];
}

/** A channel with what only the recording's page needs. `facts.channels[i]` is `file.channels[i]`. */
export interface DescribedChannel extends ChannelFacts {
  /** BIDS word, such as EEG, EOG, MISC; from channels.tsv or guessed from the label. */
  type: string;
  positionSource: 'label' | 'electrodes.tsv' | null;
}

export interface DescribedRecording {
  facts: Omit<RecordingFacts, 'channels'> & { channels: DescribedChannel[] };
  eventSource: 'annotation' | 'events.tsv';
  /** All that is odd about the file and its sidecars. */
  notices: Notice[];
}

/**
 * Everything that is known of a recording without its samples: from the header, the annotations
 * and the sidecars. Reads the annotations; allocates no samples.
 * @throws EdfError as `readAnnotations` does.
 */
export async function factsOf(
  file: EdfFile,
  identity: { sha256: string; name: string },
  sidecars: Sidecars = {},
): Promise<DescribedRecording> {
  const read = await file.readAnnotations();
  const notices = [...file.notices, ...read.notices];
  const events =
    sidecars.events ??
    read.annotations.map(({ onsetS, durationS, text }) => ({ onsetS, durationS, label: text }));
  const outside = events.filter(({ onsetS }) => !isRecorded(file, onsetS)).length;
  if (outside > 0) {
    notices.push({
      code: 'events-outside',
      message: `${outside} events lie outside the recorded time and can make no epoch.`,
    });
  }
  const channels = describeChannels(file.channels, sidecars, notices);
  return {
    facts: {
      ...identity,
      segments: file.segments.map(({ startS, durationS }) => ({ startS, durationS })),
      channels,
      events,
    },
    eventSource: sidecars.events ? 'events.tsv' : 'annotation',
    notices,
  };
}

function isRecorded(file: EdfFile, onsetS: number): boolean {
  let low = 0;
  let high = file.segments.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (file.segments[middle].startS <= onsetS) low = middle + 1;
    else high = middle;
  }
  const segment = file.segments[low - 1];
  return segment !== undefined && onsetS < segment.startS + segment.durationS;
}

function describeChannels(
  signals: EdfSignal[],
  sidecars: Sidecars,
  notices: Notice[],
): DescribedChannel[] {
  const sites = uniqueSites(signals, notices);
  const rows = byLabel(sidecars.channels ?? []);
  const projected = projectElectrodes(sidecars.electrodes ?? []);
  notices.push(...projected.notices);
  const places = byLabel([...projected.positions].map(([name, place]) => ({ name, place })));
  const channels = signals.map((signal, i): DescribedChannel => {
    const row = rows(signal.label);
    const type = row?.type ?? guessChannelType(signal.label, signal.dimension);
    const measured = places(signal.label)?.place ?? null;
    const ideal: Position | null =
      type === 'EEG' ? positionOfSite(siteOf(signal.label) ?? '') : null;
    return {
      label: signal.label,
      site: sites[i],
      unit: signal.unit,
      samplingRateHz: signal.samplingRateHz,
      bad: signal.scale === null || (row?.bad ?? false),
      position: measured ?? ideal,
      type,
      positionSource: measured ? 'electrodes.tsv' : ideal ? 'label' : null,
    };
  });
  noteUnknownRows(signals, sidecars, notices);
  return channels;
}

/** Finds a row by the exact label, or by the site that both name. */
function byLabel<T extends { name: string }>(rows: T[]): (label: string) => T | undefined {
  const exact = new Map(rows.map((row) => [row.name, row]));
  const bySite = new Map(rows.map((row) => [siteOf(row.name), row]));
  return (label) => {
    const site = siteOf(label);
    return exact.get(label) ?? (site === null ? undefined : bySite.get(site));
  };
}

/** Plans name channels by site, so no two channels may share one. */
function uniqueSites(signals: EdfSignal[], notices: Notice[]): string[] {
  const wished = signals.map((signal) => siteOf(signal.label) ?? signal.label);
  const claims = new Map<string, number>();
  for (const site of wished) claims.set(site, (claims.get(site) ?? 0) + 1);
  const labels = wished.map((site, i) => (claims.get(site)! > 1 ? signals[i].label : site));
  const used = new Set<string>();
  const sites = labels.map((label, i) => {
    const name = label === '' ? `channel ${i + 1}` : label;
    let site = name;
    for (let copy = 2; used.has(site); copy++) site = `${name} (${copy})`;
    used.add(site);
    return site;
  });
  const shared = [...claims].filter(([, count]) => count > 1).map(([site]) => site);
  if (shared.length > 0) {
    notices.push({
      code: 'sites-shared',
      message:
        `Several channels stand for ${shared.join(', ')}; they keep their own labels as names, ` +
        'with a number where those are equal too.',
    });
  }
  return sites;
}

function noteUnknownRows(signals: EdfSignal[], sidecars: Sidecars, notices: Notice[]): void {
  const find = byLabel(signals.map((signal) => ({ name: signal.label })));
  for (const [file, rows] of [
    ['channels.tsv', sidecars.channels ?? []],
    ['electrodes.tsv', sidecars.electrodes ?? []],
  ] as const) {
    const unknown = rows.filter((row) => find(row.name) === undefined).map((row) => row.name);
    if (unknown.length === 0) continue;
    notices.push({
      code: 'sidecar-rows-unused',
      message: `${file} names channels that the recording does not have: ${unknown.join(', ')}.`,
    });
  }
}
