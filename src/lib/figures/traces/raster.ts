import type { Extents } from './extents';

/** The picture of all traces, transparent where there is none; a pixel is 0xAABBGGRR. */
export interface Picture {
  pixels: Uint32Array;
  width: number;
  height: number;
}

export interface Row {
  /** Pixels from the top. */
  centre: number;
  /** Digital value at the centre. */
  middle: number;
  pixelsPerStep: number;
  /** Red, green and blue as 0xBBGGRR. */
  colour: number;
  /** At least this thick, pixels. */
  thickness: number;
}

/**
 * Draws one trace: each column is a vertical bar over its extent, with the ends' alpha by how much
 * of their pixel is covered. Several hundred thousand such bars a frame are too many for a
 * canvas' lines, and cheap as plain memory.
 */
export function drawRow(picture: Picture, extents: Extents, row: Row): void {
  const { pixels, width, height } = picture;
  const { low, high } = extents;
  const { centre, middle, pixelsPerStep, colour, thickness } = row;
  const solid = (0xff000000 | colour) >>> 0;
  for (let c = 0; c < width; c++) {
    if (low[c] > high[c]) continue;
    let top = centre - (high[c] - middle) * pixelsPerStep;
    let bottom = centre - (low[c] - middle) * pixelsPerStep;
    const thin = (thickness - (bottom - top)) / 2;
    if (thin > 0) {
      top -= thin;
      bottom += thin;
    }
    if (bottom <= 0 || top >= height) continue;
    if (top < 0) top = 0;
    if (bottom > height) bottom = height;
    const first = Math.floor(top);
    const last = Math.min(height - 1, Math.floor(bottom));
    if (first === last) {
      blend(pixels, first * width + c, colour, bottom - top);
      continue;
    }
    blend(pixels, first * width + c, colour, first + 1 - top);
    for (let y = first + 1, at = y * width + c; y < last; y++, at += width) pixels[at] = solid;
    blend(pixels, last * width + c, colour, bottom - last);
  }
}

function blend(pixels: Uint32Array, at: number, colour: number, coverage: number): void {
  const alpha = Math.min(255, Math.round(coverage * 255));
  if (alpha > pixels[at] >>> 24) pixels[at] = ((alpha << 24) | colour) >>> 0;
}

/** A CSS colour "#rrggbb" as 0xBBGGRR. */
export function packColour(css: string): number {
  const value = Number.parseInt(css.trim().replace('#', ''), 16);
  return ((value & 0xff) << 16) | (value & 0xff00) | ((value >> 16) & 0xff);
}
