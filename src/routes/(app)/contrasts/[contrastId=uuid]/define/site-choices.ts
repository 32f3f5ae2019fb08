import type { PlanDraft } from '$lib/model/plan-draft';
import { recordingsOf } from '$lib/model/plan-parse';
import type { StudyRecording } from '$lib/model/study-recording';

export interface SiteChoice {
  site: string;
  eeg: boolean;
  /** Marked bad in at least one of the recordings. */
  bad: boolean;
  position: { x: number; y: number; z: number } | null;
}

/** The sites that all the recordings have, in the order of the first one's channels. */
export function siteChoices(recordings: readonly StudyRecording[]): SiteChoice[] {
  const [first, ...others] = recordings;
  if (!first) return [];
  const inAll = (site: string) =>
    others.every((each) => each.channels.some((channel) => channel.site === site));
  const badAnywhere = (site: string) =>
    recordings.some((each) =>
      each.channels.some((channel) => channel.site === site && channel.bad),
    );
  const eeg = new Set(first.eegSites);
  const seen = new Set<string>();
  return first.channels.flatMap(({ site, position }) => {
    if (seen.has(site) || !inAll(site)) return [];
    seen.add(site);
    return [{ site, position, eeg: eeg.has(site), bad: badAnywhere(site) }];
  });
}

export function goodSites(choices: readonly SiteChoice[]): string[] {
  return choices.filter((choice) => choice.eeg && !choice.bad).map((choice) => choice.site);
}

/** The recordings that the rules name, or all of the participant while none is named. */
export function usedRecordings(
  draft: PlanDraft,
  recordings: readonly StudyRecording[],
): readonly StudyRecording[] {
  const used = new Set(recordingsOf(draft));
  const named = recordings.filter((each) => used.has(each.sha256));
  return named.length > 0 ? named : recordings;
}
