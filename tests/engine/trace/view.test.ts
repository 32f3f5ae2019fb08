import { describe, expect, it } from 'vitest';
import { eventLanes, lanePath } from '$lib/figures/event-lanes';
import { readableLabels } from '$lib/figures/label-overlap';
import { clockText, firstEventAt, gapsIn, timeTicks } from '$lib/figures/traces/marks';
import { drawRow, packColour } from '$lib/figures/traces/raster';
import { fittingScale } from '$lib/figures/traces/scale';
import { TraceView } from '$lib/figures/traces/trace-view.svelte';

describe('TraceView', () => {
  it('keeps the window within the recording, and its width above the shortest', () => {
    const view = new TraceView(64, 2, 102);
    view.show({ startS: -50, widthS: 10 }, 'once');
    expect(view.target).toEqual({ startS: 2, widthS: 10 });
    view.pan(1e6, 'once');
    expect(view.target).toEqual({ startS: 92, widthS: 10 });
    view.zoom(1000, 95, 'once');
    expect(view.target).toEqual({ startS: 2, widthS: 100 });
    view.zoom(1e-9, 50, 'once');
    expect(view.target.widthS).toBe(0.05);
  });

  it('keeps the moment under the pointer in its place while it zooms', () => {
    const view = new TraceView(64, 0, 100);
    view.show({ startS: 40, widthS: 10 }, 'once');
    view.zoom(0.5, 42, 'once');
    expect(view.target.startS + 0.2 * view.target.widthS).toBeCloseTo(42, 12);
  });

  it('moves what is drawn to the target, and arrives', () => {
    const view = new TraceView(4, 0, 100);
    view.pan(30, 'ease');
    expect(view.shown.startS).toBe(0);
    let frames = 0;
    while (view.advance(16)) frames++;
    expect(view.shown).toBe(view.target);
    expect(frames).toBeLessThan(60);
  });

  it('scales rows in steps of 1, 2 and 5, and then no longer fits them by itself', () => {
    const view = new TraceView(4, 0, 100);
    view.fitRows(100);
    const up = [1, 1, 1].map(() => (view.scaleRows(1), view.microvoltsPerRow));
    expect(up).toEqual([200, 500, 1000]);
    const down = [1, 1, 1, 1].map(() => (view.scaleRows(-1), view.microvoltsPerRow));
    expect(down).toEqual([500, 200, 100, 50]);
    view.fitRows(2000);
    expect(view.microvoltsPerRow).toBe(50);
    view.followRows();
    view.fitRows(2000);
    expect(view.microvoltsPerRow).toBe(2000);
  });

  it('shows many channels in pages, with the chosen one in view', () => {
    const view = new TraceView(100, 0, 10);
    expect(view.rowsShown).toBe(32);
    view.choose(99);
    expect(view.firstRow).toBe(68);
    view.pageRows(-1);
    expect([view.firstRow, view.chosen]).toEqual([36, 67]);
    view.showRows(100);
    expect([view.firstRow, view.rowsShown]).toEqual([0, 100]);
  });
});

describe('marks', () => {
  it('writes times as seconds below a minute and as clock times above', () => {
    expect([9.5, 59.96, 125, 3725.25, -3].map((s) => clockText(s, 1))).toEqual([
      '9.5',
      '1:00.0',
      '2:05.0',
      '1:02:05.3',
      '−3.0',
    ]);
  });

  it('places ticks at round times within the window', () => {
    expect(
      timeTicks(0, 3600, 12)
        .map((tick) => tick.text)
        .slice(0, 3),
    ).toEqual(['0', '5:00', '10:00']);
    for (const [from, to] of [
      [0.1, 0.4],
      [7, 17],
      [1000, 1900],
      [0, 90000],
    ]) {
      const ticks = timeTicks(from, to, 10);
      expect(ticks.length).toBeGreaterThan(3);
      expect(ticks.length).toBeLessThan(25);
      for (const { atS } of ticks) expect(atS >= from && atS <= to).toBe(true);
      expect(new Set(ticks.map((tick) => tick.text)).size).toBe(ticks.length);
    }
  });

  it('finds events and gaps of a window', () => {
    const events = [1, 2, 2, 5].map((onsetS) => ({ onsetS, durationS: null, label: 'x' }));
    expect([0, 2, 2.1, 9].map((timeS) => firstEventAt(events, timeS))).toEqual([0, 1, 3, 4]);
    const segments = [
      { startS: 1, durationS: 2 },
      { startS: 5, durationS: 2 },
    ];
    expect(gapsIn(segments, 0, 8)).toEqual([
      [0, 1],
      [3, 5],
      [7, 8],
    ]);
    expect(gapsIn(segments, 1.5, 2.5)).toEqual([]);
  });
});

describe('drawRow', () => {
  it('covers exactly the pixels of the extent, with the ends by their share', () => {
    const picture = { pixels: new Uint32Array(20), width: 2, height: 10 };
    const extents = { low: Float32Array.of(-2, Infinity), high: Float32Array.of(1.5, -Infinity) };
    const row = {
      centre: 5,
      middle: 0,
      pixelsPerStep: 1,
      colour: packColour('#16191d'),
      thickness: 1,
    };
    drawRow(picture, extents, row);
    const alpha = Array.from({ length: 10 }, (_, y) => picture.pixels[2 * y] >>> 24);
    expect(alpha).toEqual([0, 0, 0, 128, 255, 255, 255, 0, 0, 0]);
    expect(picture.pixels[8] & 0xffffff).toBe(0x1d1916);
    expect(Array.from({ length: 10 }, (_, y) => picture.pixels[2 * y + 1])).toEqual(
      Array(10).fill(0),
    );
  });

  it('stays within the picture', () => {
    const picture = { pixels: new Uint32Array(4), width: 1, height: 4 };
    const row = { centre: 2, middle: 0, pixelsPerStep: 1, colour: 0, thickness: 1 };
    drawRow(picture, { low: Float32Array.of(-1e6), high: Float32Array.of(1e6) }, row);
    expect([...picture.pixels]).toEqual(Array(4).fill(0xff000000));
  });
});

describe('fittingScale', () => {
  it('is the next of 1, 2, 5 above one and a half times the middle reach', () => {
    expect(fittingScale([10, 60, 1000])).toBe(100);
    expect(fittingScale([NaN, 0.3])).toBe(0.5);
    expect(fittingScale([NaN, 0])).toBeNull();
  });
});

describe('eventLanes', () => {
  it('groups by label, the most frequent first, with first, last and medians', () => {
    const lanes = eventLanes([
      { onsetS: 9, durationS: 1, label: 'b' },
      { onsetS: 4, durationS: null, label: 'a' },
      { onsetS: 1, durationS: 3, label: 'b' },
      { onsetS: 3, durationS: null, label: 'b' },
    ]);
    expect(lanes.map(({ label, events }) => [label, events.length])).toEqual([
      ['b', 3],
      ['a', 1],
    ]);
    expect(lanes[0]).toMatchObject({ firstS: 1, lastS: 9, medianIntervalS: 4, medianDurationS: 2 });
    expect(lanes[1]).toMatchObject({ medianIntervalS: null, medianDurationS: null });
  });

  it('draws events of one pixel once', () => {
    const events = [0, 0.1, 0.2, 7].map((onsetS) => ({ onsetS, durationS: 2, label: 'x' }));
    const { ticks, bars } = lanePath(events, (timeS) => timeS, 20);
    expect(ticks.split('M')).toHaveLength(1 + 2);
    expect(bars.split('M')).toHaveLength(1 + 4);
  });
});

describe('readableLabels', () => {
  it('leaves out a label that lies on one before it', () => {
    const at = (x: number, text: string) => ({ x, y: 10, anchor: 'middle' as const, text });
    expect(readableLabels([at(0, 'AF3'), at(8, 'F3'), at(40, 'F4')], 11)).toEqual([
      true,
      false,
      true,
    ]);
  });
});
