import { describe, expect, it } from 'vitest';
import { firstRules } from '../../../src/routes/(app)/contrasts/[contrastId=uuid]/define/first-rules';
import {
  goodSites,
  siteChoices,
} from '../../../src/routes/(app)/contrasts/[contrastId=uuid]/define/site-choices';
import { studyRecording } from './study-recording';

const rest = (id: string) =>
  studyRecording({ sha256: id.repeat(64), name: `${id}.edf`, events: [], durationS: 60.5 });

describe('firstRules', () => {
  it('takes the events of the first recording that has two labels', () => {
    const [a, b] = firstRules([rest('a'), studyRecording()]);
    expect([a[0], b[0]]).toMatchObject([
      { kind: 'events', recording: studyRecording().sha256 },
      { kind: 'events', recording: studyRecording().sha256 },
    ]);
  });

  it('takes evenly spaced epochs of two recordings at rest, to their last whole second', () => {
    const [a, b] = firstRules([rest('a'), rest('b')]);
    expect([a[0], b[0]]).toMatchObject([
      { kind: 'even', recording: 'a'.repeat(64), toS: '60' },
      { kind: 'even', recording: 'b'.repeat(64), toS: '60' },
    ]);
  });

  it('makes no rule without a recording', () => {
    expect(firstRules([])).toEqual([[], []]);
  });
});

describe('site choices', () => {
  it('offer the sites all recordings have, and leave out by default what is bad or no EEG', () => {
    const other = studyRecording({ sha256: 'c'.repeat(64) });
    other.channels = other.channels
      .filter(({ site }) => site !== 'P3')
      .map((channel) => ({ ...channel, bad: channel.site === 'C4' }));
    const choices = siteChoices([studyRecording({ eegSites: ['C3', 'C4', 'P4'] }), other]);
    expect(choices.map(({ site, bad }) => [site, bad])).toEqual([
      ['C3', false],
      ['C4', true],
      ['P4', true],
    ]);
    expect(goodSites(choices)).toEqual(['C3']);
  });
});
