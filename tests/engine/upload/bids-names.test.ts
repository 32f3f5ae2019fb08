import { describe, expect, it } from 'vitest';
import { fit, kindOf, participantIn } from '$lib/model/bids-names';

describe('what a dropped file is for', () => {
  it.each([
    ['sub-01_task-rest_eeg.edf', 'recording'],
    ['REST.EDF', 'recording'],
    ['sub-01_task-rest_events.tsv', 'events'],
    ['events.tsv', 'events'],
    ['rest.channels.tsv', 'channels'],
    ['sub-01_space-CapTrak_electrodes.tsv', 'electrodes'],
    ['participants.tsv', 'participants'],
    ['nonevents.tsv', 'unknown'],
    ['notes.txt', 'unknown'],
  ])('%s: %s', (name, kind) => {
    expect(kindOf(name)).toBe(kind);
  });

  it.each([
    ['sub-03_task-rest_eeg.edf', '03'],
    ['sub-P07.edf', 'P07'],
    ['ses-1_sub-x9_eeg.edf', 'x9'],
    ['subject-3.edf', null],
    ['rest.edf', null],
  ])('the participant in %s is %s', (name, code) => {
    expect(participantIn(name)).toBe(code);
  });
});

// The inheritance principle of BIDS (1.11.1, common principles): a sidecar applies to every file
// that has all of its entities.
describe('whether a sidecar fits a recording', () => {
  const recording = 'sub-01_ses-2_task-rest_eeg.edf';
  it.each([
    ['sub-01_ses-2_task-rest_events.tsv', Infinity],
    ['sub-01_task-rest_events.tsv', 2],
    ['task-rest_events.tsv', 1],
    ['sub-01_space-CapTrak_electrodes.tsv', 1],
    ['sub-02_ses-2_task-rest_events.tsv', null],
    ['sub-01_ses-2_task-tap_events.tsv', null],
    ['sub-01_ses-2_task-rest_run-1_events.tsv', null],
    ['events.tsv', null],
  ])('%s: %s', (sidecar, expected) => {
    expect(fit(sidecar, recording)).toBe(expected);
  });

  it('outside BIDS only the same stem fits', () => {
    expect(fit('P02 tapping_events.tsv', 'P02 tapping.edf')).toBe(Infinity);
    expect(fit('P02_events.tsv', 'P02 tapping.edf')).toBeNull();
  });
});
