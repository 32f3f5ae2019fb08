import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import seedrandom from 'seedrandom';
import { normals, pinkNoise, rhythm } from '../../scripts/demo/noise';
import { writeEdf } from '../../workers/engine';

/** Two recordings at rest, for the whole path from file to edge. */
export interface RestRecordings {
  closed: string;
  open: string;
  /** Simulated where the folder of real recordings is not given. */
  simulated: boolean;
  /** Bytes of a file, to compare what is stored with what was uploaded. */
  bytes(file: string): Uint8Array;
}

export function restRecordings(): RestRecordings {
  const folder = process.env['RECORDINGS_DIR'];
  const bytes = (file: string) => new Uint8Array(readFileSync(file));
  if (folder) {
    const file = (name: string) => path.join(folder, name);
    return {
      closed: file('eyes-closed.edf'),
      open: file('eyes-open.edf'),
      simulated: false,
      bytes,
    };
  }
  console.log('RECORDINGS_DIR is unset: the path is walked with simulated recordings');
  const made = mkdtempSync(path.join(tmpdir(), 'nullwright-rest-'));
  const closed = path.join(made, 'eyes-closed.edf');
  const open = path.join(made, 'eyes-open.edf');
  writeFileSync(closed, simulateRest('rest/closed', true));
  writeFileSync(open, simulateRest('rest/open', false));
  return { closed, open, simulated: true, bytes };
}

const rateHz = 160;
const seconds = 60;
const labels = ['F3..', 'F4..', 'Cz..', 'P3..', 'Pz..', 'P4..', 'O1..', 'O2..'];

/** Eyes closed: O1 and O2 follow one 10 Hz rhythm with a lag; eyes open: each its own. */
function simulateRest(seed: string, together: boolean): Uint8Array {
  const normal = normals(seedrandom(seed));
  const count = rateHz * seconds;
  const own = () => rhythm(count, rateHz, { hz: 10, memoryS: 0.4, normal });
  const shared = own();
  const lagSamples = 3;
  return writeEdf({
    startedAt: '2026-03-02T10:00:00',
    recordDurationS: 1,
    signals: labels.map((label) => {
      const noise = pinkNoise(count, rateHz, normal);
      const source = together && label.startsWith('O') ? shared : own();
      const delay = label === 'O2..' ? lagSamples : 0;
      const samples = Float32Array.from(
        noise,
        (value, i) => 8 * value + 10 * source[Math.max(0, i - delay)],
      );
      const limits = { physicalMin: -200, physicalMax: 200 };
      return { label, unit: 'uV', ...limits, samplesPerRecord: rateHz, samples };
    }),
    annotations: [{ onsetS: 0, text: 'T0' }],
  });
}
