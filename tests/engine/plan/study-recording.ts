import type { StudyRecording } from '$lib/model/study-recording';
import { newDraft, newRule, type PlanDraft } from '$lib/model/plan-draft';

export const sha256 = 'ab'.repeat(32);

/** A recording of a hundred seconds with alternating events, for checks that read no samples. */
export function studyRecording(change: Partial<StudyRecording> = {}): StudyRecording {
  const sites = ['C3', 'C4', 'P3', 'P4'];
  return {
    id: '00000000-0000-4000-8000-000000000001',
    sha256,
    name: 'tapping.edf',
    participant: 'P01',
    simulated: true,
    sizeBytes: 1000,
    durationS: 100,
    segments: [{ startS: 0, durationS: 100 }],
    channels: sites.map((site) => ({
      label: `${site}..`,
      site,
      unit: 'uV',
      samplingRateHz: 160,
      bad: site === 'P4',
      position: { x: 0, y: 0, z: 1 },
    })),
    events: Array.from({ length: 38 }, (_, i) => ({
      onsetS: 2 + 2.5 * i,
      durationS: null,
      label: i % 2 ? 'free' : 'cued',
    })),
    eegSites: sites,
    ...change,
  };
}

export function tappingDraft(): PlanDraft {
  const draft = newDraft('Does the beat matter?', 'tide-2');
  draft.participant = 'P01';
  draft.a = { name: 'cued', rules: [{ ...newRule('events', sha256), labels: ['cued'] }] };
  draft.b = { name: 'free', rules: [{ ...newRule('events', sha256), labels: ['free'] }] };
  draft.sites = ['C3', 'C4', 'P3'];
  return draft;
}
