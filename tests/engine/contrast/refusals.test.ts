import { once } from 'node:events';
import { watch } from 'node:fs';
import { mkdir, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { smallRecording } from '../run/small-run';
import { begin, contrast, openDesk, type Desk } from './command';

let desk: Desk;
beforeAll(async () => {
  desk = await openDesk();
});
afterAll(() => rm(desk.folder, { recursive: true }));

/** The arguments of a good run, with some replaced; null leaves one out. */
function args(change: Record<string, string | null> = {}): string[] {
  const given: Record<string, string | null> = {
    '--plan': desk.at('plan.json'),
    '--recording': desk.recording,
    '--out': desk.at('refused'),
    ...change,
  };
  return Object.entries(given).flatMap(([name, value]) => (value === null ? [] : [name, value]));
}

/** The same file with every sample of its first site, F3, zero. */
function withFlatSite(edf: Uint8Array): Uint8Array {
  const field = (at: number, width: number) =>
    Number(new TextDecoder().decode(edf.subarray(at, at + width)));
  const [headBytes, records] = [field(184, 8), field(236, 8)];
  const recordBytes = (edf.length - headBytes) / records;
  for (let record = 0; record < records; record++) {
    const start = headBytes + record * recordBytes;
    edf.fill(0, start, start + 64 * 2);
  }
  return edf;
}

/** Ended with this code and one line that has these words, and left nothing behind. */
async function expectRefusal(words: (string | RegExp)[], code: number, given: string[]) {
  const before = await readdir(desk.folder);
  const ended = await contrast(...given);
  expect(ended.code, ended.stderr).toBe(code);
  expect(ended.stdout).toBe('');
  expect(ended.stderr).toMatch(/^contrast: [^\n]+\n$/);
  for (const word of words) expect(ended.stderr).toMatch(word);
  expect(await readdir(desk.folder)).toEqual(before);
}

const planWith = async (name: string, change: object) =>
  desk.planFile(name, { ...desk.plan, ...change });

describe('bad options end with 2 and one line that says which and what to do', () => {
  test.each([
    ['no plan', { '--plan': null }, ['--plan is missing', 'name the plan']],
    ['no recording', { '--recording': null }, ['--recording is missing', 'name each EDF']],
    ['no folder', { '--out': null }, ['--out is missing', 'name the folder']],
    ['workers that are no count', { '--workers': '2.5' }, ['--workers is "2.5"', '1 to 64']],
    ['no workers', { '--workers': '0' }, ['--workers is "0"', '1 to 64']],
    ['an empty seed', { '--seed': ' ' }, ['--seed has 0 characters', '1 to 80']],
    ['an unknown option', { '--colour': 'red' }, ["'--colour'", 'see --help']],
  ])('%s', async (_, change, words) => {
    await expectRefusal(words, 2, args(change));
  });

  test('a word that belongs to no option', async () => {
    await expectRefusal(["'stray'", 'see --help'], 2, [...args(), 'stray']);
  });
});

describe('a plan that cannot be used ends with 2', () => {
  test('because there is no such file', async () => {
    const file = desk.at('none.json');
    await expectRefusal([`--plan ${file}`, 'no such file'], 2, args({ '--plan': file }));
  });

  test('because it is no JSON', async () => {
    const file = await desk.planFile('broken.json', '{"format":\n oops}');
    await expectRefusal(['is no JSON', 'download it again'], 2, args({ '--plan': file }));
  });

  test('because a field is wrong, which is named with its value and the remedy', async () => {
    const file = await planWith('alpha.json', { test: { ...desk.plan.test, alpha: 0.7 } });
    const words = ['test.alpha', 'at most 0.5', 'it is 0.7'];
    await expectRefusal(words, 2, args({ '--plan': file }));
  });

  test('because it has a field that plans do not have', async () => {
    const file = await planWith('extra.json', { colour: 'red' });
    await expectRefusal(
      ['colour: is no field of a plan; take it out'],
      2,
      args({ '--plan': file }),
    );
  });

  test('because it does not fit its recordings', async () => {
    const file = await planWith('sites.json', { sites: ['F3', 'Oz'] });
    const words = [', sites: rest.edf has no Oz', 'leave this site out'];
    await expectRefusal(words, 2, args({ '--plan': file }));
  });

  test('because its limits leave too few epochs', async () => {
    const { reject } = desk.plan.epoch;
    const epoch = { ...desk.plan.epoch, reject: { ...reject, aboveUv: 0.001 } };
    const file = await planWith('strict.json', { epoch });
    await expectRefusal(['Condition A has 0 epochs left', 'Loosen'], 2, args({ '--plan': file }));
  });
});

describe('a recording that cannot be used ends with 2', () => {
  test('because there is no such file', async () => {
    const file = desk.at('none.edf');
    await expectRefusal([`--recording ${file}`, 'no such'], 2, args({ '--recording': file }));
  });

  test('because it is not the one that the plan was made for', async () => {
    const bytes = smallRecording();
    bytes[bytes.length - 1]! ^= 1;
    await writeFile(desk.at('other.edf'), bytes);
    const words = ['other.edf: its SHA-256 is', `rest.edf \\(${desk.sha256.slice(0, 12)}`];
    await expectRefusal(
      words.map((word) => new RegExp(word)),
      2,
      args({ '--recording': desk.at('other.edf') }),
    );
  });

  test('because it is given twice', async () => {
    const words = ['holds the same as', 'give it once'];
    await expectRefusal(words, 2, [...args(), '--recording', desk.recording]);
  });

  test('because another recording of the plan is not given', async () => {
    const other = { sha256: 'f'.repeat(64), name: 'second.edf' };
    const file = await planWith('two.json', { recordings: [...desk.plan.recordings, other] });
    const words = ["the plan's recording second.edf", 'give it too'];
    await expectRefusal(words, 2, args({ '--plan': file }));
  });

  test('because a sidecar beside it is spoilt, which names file, line and value', async () => {
    const lone = await openDesk();
    try {
      await writeFile(lone.at('rest_events.tsv'), 'onset\tduration\nsoon\t0\n');
      const { code, stderr } = await contrast(
        ...['--plan', lone.at('plan.json'), '--recording', lone.recording],
        ...['--out', lone.at('out')],
      );
      expect(code).toBe(2);
      expect(stderr).toMatch(
        /^contrast: rest_events\.tsv, line 2, column "onset": "soon"[^\n]+\n$/,
      );
    } finally {
      await rm(lone.folder, { recursive: true });
    }
  });
});

describe('the folder of the result', () => {
  test('is refused while it holds anything, and left as it is', async () => {
    await mkdir(desk.at('full'));
    await writeFile(desk.at('full/notes.txt'), 'mine');
    const given = args({ '--out': desk.at('full') });
    await expectRefusal(['is not empty', '--overwrite'], 2, given);
    await expectRefusal(['holds notes.txt', 'another folder'], 2, [...given, '--overwrite']);
    expect(await readFile(desk.at('full/notes.txt'), 'utf8')).toBe('mine');
  });

  test('is refused when it is a file', async () => {
    await expectRefusal(['is a file'], 2, args({ '--out': desk.recording }));
  });

  test('may be empty; an earlier result is replaced whole when asked, and only then', async () => {
    await mkdir(desk.at('again'));
    const given = args({ '--out': desk.at('again') });
    expect((await contrast(...given)).code).toBe(0);
    await expectRefusal(['is not empty'], 2, given);
    const { code } = await contrast(...given, '--overwrite', '--seed', 'ebb');
    expect(code).toBe(0);
    const result = JSON.parse(await readFile(desk.at('again/result.json'), 'utf8'));
    expect(result.seed).toBe('ebb');
    expect((await readdir(desk.folder)).filter((name) => name.startsWith('.'))).toEqual([]);
    await rm(desk.at('again'), { recursive: true });
  });
});

describe('a run that does not come to its end', () => {
  test('fails with 1 and one line when the engine refuses the samples', async () => {
    const { epoch } = desk.plan;
    const flat = await openDesk(
      { epoch: { ...epoch, reject: { ...epoch.reject, aboveUv: null } } },
      withFlatSite(smallRecording()),
    );
    try {
      const { code, stderr } = await contrast(
        ...['--plan', flat.at('plan.json'), '--recording', flat.recording],
        ...['--out', flat.at('out')],
      );
      expect(code, stderr).toBe(1);
      expect(stderr).toMatch(/^contrast: F3 is flat [^\n]+\n$/);
      expect(await readdir(flat.folder)).not.toContain('out');
    } finally {
      await rm(flat.folder, { recursive: true });
    }
  });

  test('ends with 130 when interrupted, and leaves nothing', async () => {
    const plan = await planWith('long.json', {
      test: { ...desk.plan.test, permutations: 100_000 },
    });
    const before = await readdir(desk.folder);
    // The folder that is being filled appears when the run begins, before its first thread does.
    const watched = watch(desk.folder);
    const { child, ended } = begin(args({ '--plan': plan, '--workers': '1' }));
    await once(watched, 'change');
    watched.close();
    child.kill('SIGINT');
    expect(await ended).toEqual({
      code: 130,
      stdout: '',
      stderr: 'contrast: interrupted; no result was written.\n',
    });
    expect(await readdir(desk.folder)).toEqual(before);
  });
});
