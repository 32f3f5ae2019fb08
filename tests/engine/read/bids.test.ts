import { describe, expect, it } from 'vitest';
import {
  parseChannels,
  parseElectrodes,
  parseEvents,
  parseParticipants,
  SidecarError,
} from '../../../workers/engine/read';

const bytes = (text: string) => new TextEncoder().encode(text);

function failure(action: () => unknown): SidecarError {
  try {
    action();
  } catch (error) {
    expect(error).toBeInstanceOf(SidecarError);
    return error as SidecarError;
  }
  throw new Error('the sidecar was read without an error');
}

describe('parseEvents', () => {
  it('reads onsets, durations and labels, in order of onset', () => {
    const text =
      'onset\tduration\ttrial_type\tvalue\n2.5\t0.5\tcued\t1\n1e0\tn/a\tn/a\t2\n3\t0\tn/a\tn/a\n';
    expect(parseEvents('events.tsv', bytes(text))).toEqual([
      { onsetS: 1, durationS: null, label: '2' },
      { onsetS: 2.5, durationS: 0.5, label: 'cued' },
      { onsetS: 3, durationS: 0, label: 'event' },
    ]);
  });

  it('accepts a byte-order mark, Windows line ends and quoted tabs', () => {
    const text = '\ufeffonset\tduration\ttrial_type\r\n1\t0\t"a\tb ""c"""\r\n';
    expect(parseEvents('e.tsv', bytes(text))[0].label).toBe('a\tb "c"');
  });

  it.each([
    [
      'onset\tduration\n1\t0\n1,5\t0\n',
      3,
      'onset',
      '1,5',
      /line 3, column "onset": "1,5" is not a number/,
    ],
    ['onset\tduration\nn/a\t0\n', 2, 'onset', 'n/a', /stands where a value must/],
    ['onset\tduration\n1\t-2\n', 2, 'duration', '-2', /is below 0 s/],
    [
      'onset\ttrial_type\n1\ta\n',
      1,
      'duration',
      null,
      /required column "duration" is missing; found: onset, trial_type/,
    ],
    ['onset\tduration\n1 0\n', 2, null, null, /1 values, and the header names 2 columns/],
    ['onset\tduration\tonset\n', 1, 'onset', 'onset', /names a second column/],
    ['', 1, null, null, /the file is empty/],
  ])('refuses %j, naming line, column, value and remedy', (text, line, column, value, message) => {
    const error = failure(() => parseEvents('events.tsv', bytes(text)));
    expect(error).toMatchObject({ file: 'events.tsv', line, column, value });
    expect(error.message).toMatch(message);
    expect(error.message).toMatch(/^events\.tsv, line/);
    expect(error.remedy.length).toBeGreaterThan(10);
  });

  it('names the line that is not UTF-8', () => {
    const text = bytes('onset\tduration\ttrial_type\n1\t0\tok\n2\t0\t#\n');
    text[text.indexOf(0x23)] = 0xff;
    expect(failure(() => parseEvents('e.tsv', text))).toMatchObject({ line: 3 });
  });
});

describe('parseChannels', () => {
  it('reads type, units and status', () => {
    const text =
      'name\ttype\tunits\tstatus\nCz\teeg\tuV\tgood\nO1\tEEG\tuV\tbad\nT1\tMISC\tn/a\tn/a\n';
    expect(parseChannels('channels.tsv', bytes(text))).toEqual([
      { name: 'Cz', type: 'EEG', units: 'uV', bad: false },
      { name: 'O1', type: 'EEG', units: 'uV', bad: true },
      { name: 'T1', type: 'MISC', units: null, bad: false },
    ]);
  });

  it('refuses a channel that stands there twice and a status that is none', () => {
    const twice = 'name\ttype\tunits\nCz\tEEG\tuV\nCz\tEEG\tuV\n';
    expect(failure(() => parseChannels('c.tsv', bytes(twice))).message).toMatch(
      /line 3.*"Cz" stands in line 2 already/,
    );
    const odd = 'name\ttype\tunits\tstatus\nCz\tEEG\tuV\tfine\n';
    expect(failure(() => parseChannels('c.tsv', bytes(odd)))).toMatchObject({
      column: 'status',
      value: 'fine',
    });
  });
});

describe('parseElectrodes', () => {
  it('reads places, and none where a coordinate is missing', () => {
    const text = 'name\tx\ty\tz\nCz\t0\t0\t95.5\nGND\tn/a\tn/a\tn/a\n';
    expect(parseElectrodes('electrodes.tsv', bytes(text))).toEqual([
      { name: 'Cz', place: [0, 0, 95.5] },
      { name: 'GND', place: null },
    ]);
  });
});

describe('parseParticipants', () => {
  it('reads codes without their prefix', () => {
    const text = 'participant_id\tage\nsub-01\t34\nP02\tn/a\n';
    expect(parseParticipants('participants.tsv', bytes(text)).map((p) => p.code)).toEqual([
      '01',
      'P02',
    ]);
  });

  it('refuses what may be a name', () => {
    const error = failure(() => parseParticipants('p.tsv', bytes('participant_id\nMarlow, I.\n')));
    expect(error.message).toMatch(/a code, never a name/);
  });
});
