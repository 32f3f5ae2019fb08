import { describe, expect, test } from 'vitest';
import { ProgressLine } from '../../../scripts/contrast/progress-line';

function terminal(isTTY: boolean) {
  const written: string[] = [];
  return { written, isTTY, columns: 100, write: (text: string) => written.push(text) };
}

describe('the progress line', () => {
  test('says counts, rate and time left, and writes over itself', () => {
    const stream = terminal(true);
    const line = new ProgressLine(stream, { permutations: 1000, quiet: false });
    line.update('pairs', 0, 2016, 0);
    line.update('pairs', 504, 2016, 2000);
    expect(stream.written.at(-1)).toBe(
      '\r\x1b[2Knull: pair permutations 504,000 of 2,016,000, 252,000 a second, 6 s left',
    );
    line.clear();
    expect(stream.written.at(-1)).toBe('\r\x1b[2K');
  });

  test('is never longer than the terminal is wide, and writes a few times a second at most', () => {
    const stream = { ...terminal(true), columns: 20 };
    const line = new ProgressLine(stream, { permutations: 1000, quiet: false });
    for (let done = 0; done < 500; done++) line.update('pairs', done, 2016, done);
    expect(stream.written).toHaveLength(3);
    expect(stream.written[0]).toHaveLength('\r\x1b[2K'.length + 19);
  });

  test.each([
    ['stderr is no terminal', false, false],
    ['--quiet is given', true, true],
  ])('writes nothing where %s', (_, isTTY, quiet) => {
    const stream = terminal(isTTY);
    const line = new ProgressLine(stream, { permutations: 1000, quiet });
    line.update('phases', 1, 10, 0);
    line.update('pairs', 10, 10, 1000);
    line.clear();
    expect(stream.written).toEqual([]);
  });
});
