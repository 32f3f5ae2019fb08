import { fillExtents, needsSamples, summarise, type Columns, type Extents } from './extents';
import { firstEventAt, gapsIn, timeTicks, type TraceEvent } from './marks';
import { unreadIn } from './unread';
import { drawRow, packColour, type Picture } from './raster';
import type { Span } from './trace-view.svelte';
import type { TraceData } from './trace-data';

/** Heights above and below the rows, CSS pixels. */
export const stripHeight = 24;
export const axisHeight = 22;

const FONT = "11px 'Source Sans 3', system-ui, sans-serif";
/** More pixels than this cost more time than they show. */
const MOST_PIXELS = 2_600_000;

/** All that one frame shows. */
export interface Scene {
  data: TraceData;
  span: Span;
  rows: { channel: number; bad: boolean }[];
  /** Place of the chosen row among `rows`, or -1. */
  chosenRow: number;
  microvoltsPerRow: number;
  /** Digital steps in a row's height for channels that are no voltages. */
  stepsPerRow: (channel: number) => number;
  events: readonly TraceEvent[];
  segments: readonly { startS: number; durationS: number }[];
  widthPx: number;
  heightPx: number;
}

/** Draws frames: grid, gaps and marks on one canvas, traces as pixels on another above it. */
export class TracePainter {
  private readonly under: CanvasRenderingContext2D;
  private readonly over: CanvasRenderingContext2D;
  private image: ImageData | null = null;
  private picture: Picture = { pixels: new Uint32Array(0), width: 0, height: 0 };
  private extents: Extents = { low: new Float32Array(0), high: new Float32Array(0) };

  constructor(
    private readonly underCanvas: HTMLCanvasElement,
    private readonly overCanvas: HTMLCanvasElement,
  ) {
    this.under = underCanvas.getContext('2d')!;
    this.over = overCanvas.getContext('2d')!;
  }

  /**
   * Returns the columns that were drawn, so that the data can be asked for what they need, and how
   * far the voltage channels reach, microvolts.
   */
  draw(scene: Scene): { columns: Columns; needsSamples: boolean; reachesUv: number[] } {
    const scale = this.fit(scene);
    const { width } = this.picture;
    const secondsPerColumn = scene.span.widthS / width;
    // On a fixed grid, so that the same sample falls into the same column from frame to frame.
    const startS = Math.round(scene.span.startS / secondsPerColumn) * secondsPerColumn;
    const columns = { startS, secondsPerColumn, count: width };
    const isFine = needsSamples(scene.data, columns);
    this.drawUnder(scene, columns, unreadIn(scene.data, columns, isFine));
    const reachesUv = this.drawTraces(scene, columns, scale);
    return { columns, needsSamples: isFine, reachesUv };
  }

  private fit({ widthPx, heightPx }: Scene): number {
    const density = Math.min(devicePixelRatio, Math.sqrt(MOST_PIXELS / (widthPx * heightPx)));
    const width = Math.max(1, Math.round(widthPx * density));
    const height = Math.max(1, Math.round(heightPx * density));
    if (this.picture.width !== width || this.picture.height !== height || !this.image) {
      this.image = new ImageData(width, height);
      this.picture = { pixels: new Uint32Array(this.image.data.buffer), width, height };
      this.extents = { low: new Float32Array(width), high: new Float32Array(width) };
      Object.assign(this.overCanvas, { width, height });
    }
    const underWidth = Math.round(widthPx * devicePixelRatio);
    const underHeight = Math.round((heightPx + stripHeight + axisHeight) * devicePixelRatio);
    if (this.underCanvas.width !== underWidth || this.underCanvas.height !== underHeight) {
      Object.assign(this.underCanvas, { width: underWidth, height: underHeight });
    }
    return density;
  }

  private drawTraces(scene: Scene, columns: Columns, scale: number): number[] {
    const { data, rows } = scene;
    const style = getComputedStyle(this.overCanvas);
    const ink = packColour(style.getPropertyValue('--ink'));
    const mist = packColour(style.getPropertyValue('--mist-2'));
    const rowHeight = this.picture.height / Math.max(1, rows.length);
    const reachesUv: number[] = [];
    this.picture.pixels.fill(0);
    rows.forEach(({ channel, bad }, row) => {
      fillExtents(data, channel, columns, this.extents);
      const { middle, reach } = summarise(this.extents, columns.count);
      const { unit, perStep } = data.file.channels[channel];
      const isVoltage = unit === 'uV' && perStep !== null;
      if (isVoltage && !bad) reachesUv.push(reach * Math.abs(perStep));
      const stepsPerRow = isVoltage ? scene.microvoltsPerRow / perStep : scene.stepsPerRow(channel);
      drawRow(this.picture, this.extents, {
        centre: (row + 0.5) * rowHeight,
        middle,
        pixelsPerStep: rowHeight / stepsPerRow,
        colour: bad ? mist : ink,
        thickness: 1.1 * Math.max(1, scale),
      });
    });
    this.over.putImageData(this.image!, 0, 0);
    return reachesUv;
  }

  private drawUnder(scene: Scene, columns: Columns, unread: [number, number][]): void {
    const { under } = this;
    const { widthPx, heightPx } = scene;
    const style = getComputedStyle(this.underCanvas);
    const colour = (name: string) => style.getPropertyValue(`--${name}`);
    const endS = columns.startS + columns.count * columns.secondsPerColumn;
    const xOf = (timeS: number) => ((timeS - columns.startS) / (endS - columns.startS)) * widthPx;
    under.setTransform(devicePixelRatio, 0, 0, devicePixelRatio, 0, 0);
    under.clearRect(0, 0, widthPx, heightPx + stripHeight + axisHeight);
    under.font = FONT;
    if (scene.chosenRow >= 0) {
      const rowHeight = heightPx / scene.rows.length;
      under.fillStyle = colour('wash');
      under.fillRect(0, stripHeight + scene.chosenRow * rowHeight, widthPx, rowHeight);
    }
    const gaps = gapsIn(scene.segments, columns.startS, endS);
    this.shade(gaps, 'not recorded', colour('mist-soft'), { scene, xOf, ink: colour('ink-2') });
    this.shade(unread, 'reading…', colour('wash'), { scene, xOf, ink: colour('ink-2') });
    this.drawAxis(scene, [columns.startS, endS], xOf, colour);
    this.drawEvents(scene, [columns.startS, endS], xOf, colour);
  }

  /** Stretches of time without traces, with the reason where there is room for it. */
  private shade(
    stretches: [number, number][],
    reason: string,
    fill: string,
    { scene, xOf, ink }: { scene: Scene; xOf: (timeS: number) => number; ink: string },
  ): void {
    const { under } = this;
    for (const [fromS, toS] of stretches) {
      const x = Math.max(0, xOf(fromS));
      const width = Math.max(1, Math.min(scene.widthPx, xOf(toS)) - x);
      under.fillStyle = fill;
      under.fillRect(x, stripHeight, width, scene.heightPx);
      if (width < 90) continue;
      under.fillStyle = ink;
      under.textAlign = 'center';
      under.fillText(reason, x + width / 2, stripHeight + scene.heightPx / 2);
    }
  }

  private drawAxis(
    scene: Scene,
    [startS, endS]: [number, number],
    xOf: (timeS: number) => number,
    colour: (name: string) => string,
  ): void {
    const { under } = this;
    const bottom = stripHeight + scene.heightPx;
    under.fillStyle = colour('ink-2');
    under.strokeStyle = colour('rule');
    under.textAlign = 'center';
    under.lineWidth = 1;
    under.beginPath();
    for (const { atS, text } of timeTicks(startS, endS, scene.widthPx / 90)) {
      const x = Math.round(xOf(atS)) + 0.5;
      under.moveTo(x, stripHeight);
      under.lineTo(x, bottom + 4);
      const half = under.measureText(text).width / 2;
      if (x > half && x < scene.widthPx - half) under.fillText(text, x, bottom + 16);
    }
    under.stroke();
  }

  private drawEvents(
    scene: Scene,
    [startS, endS]: [number, number],
    xOf: (timeS: number) => number,
    colour: (name: string) => string,
  ): void {
    const { under } = this;
    const { events, heightPx, widthPx } = scene;
    const from = firstEventAt(events, startS);
    const to = firstEventAt(events, endS);
    // Where marks would cover the traces, they stay in the strip above them.
    const bottom = to - from > widthPx / 8 ? stripHeight : stripHeight + heightPx;
    let freeX = 0;
    under.strokeStyle = colour('mist-2');
    under.fillStyle = colour('ink');
    under.textAlign = 'left';
    under.beginPath();
    for (let i = from; i < to; i++) {
      const { onsetS, label } = events[i];
      const x = Math.round(xOf(onsetS)) + 0.5;
      under.moveTo(x, stripHeight - 6);
      under.lineTo(x, bottom);
      if (x < freeX) continue;
      const width = under.measureText(label).width;
      const left = Math.min(x, widthPx - width);
      if (left < freeX) continue;
      under.fillText(label, left, stripHeight - 10);
      freeX = left + width + 8;
    }
    under.stroke();
  }
}
