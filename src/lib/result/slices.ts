import { parseNpy, type NpyArray } from '$workers/engine/npy';

/** Everything a run keeps of one pair, `[frequency][time]` each. */
export interface PairSlices {
  z: Float32Array;
  adjustedP: Float32Array;
  observedA: Float32Array;
  observedB: Float32Array;
  /** Preferred lags, radians. */
  lagA: Float32Array;
  lagB: Float32Array;
  nullMean: Float32Array;
  nullSd: Float32Array;
  upper: Uint32Array;
  lower: Uint32Array;
  /** `[frequency][time][bin]`: counts of the surrogates in units of the null's sd. */
  histogram: Uint16Array;
}

/** Phases of a site, 256 to the turn, `[epoch][frequency][time]`, epochs of A before B. */
export interface SitePhases {
  j: Uint8Array;
  k: Uint8Array;
}

async function slice(url: string, signal: AbortSignal): Promise<NpyArray> {
  const response = await fetch(url, { signal }).catch((reason: unknown) => {
    if (signal.aborted) throw reason;
    throw new Error('The server cannot be reached.');
  });
  if (!response.ok) {
    const body = (await response.json().catch(() => null)) as { message?: string } | null;
    throw new Error(body?.message ?? `The server answered ${response.status}.`);
  }
  return parseNpy(new Uint8Array(await response.arrayBuffer())).data;
}

/** Fetches what the figures of a pair need, in parallel. */
export async function fetchPair(
  runId: string,
  pair: number,
  correction: string,
  signal: AbortSignal,
): Promise<PairSlices> {
  const get = (name: string) => slice(`/api/runs/${runId}/maps/${name}?pair=${pair}`, signal);
  const [
    z,
    adjustedP,
    observedA,
    observedB,
    lagA,
    lagB,
    nullMean,
    nullSd,
    upper,
    lower,
    histogram,
  ] = await Promise.all([
    get('z'),
    get(`adjusted-p-${correction}`),
    get('observed-a'),
    get('observed-b'),
    get('lag-a'),
    get('lag-b'),
    get('null-mean'),
    get('null-sd'),
    get('upper'),
    get('lower'),
    get('null-histogram'),
  ]);
  return {
    z: z as Float32Array,
    adjustedP: adjustedP as Float32Array,
    observedA: observedA as Float32Array,
    observedB: observedB as Float32Array,
    lagA: lagA as Float32Array,
    lagB: lagB as Float32Array,
    nullMean: nullMean as Float32Array,
    nullSd: nullSd as Float32Array,
    upper: upper as Uint32Array,
    lower: lower as Uint32Array,
    histogram: histogram as Uint16Array,
  };
}

export async function fetchPhases(
  runId: string,
  sites: readonly [number, number],
  signal: AbortSignal,
): Promise<SitePhases> {
  const get = (site: number) => slice(`/api/runs/${runId}/maps/phases?site=${site}`, signal);
  const [j, k] = await Promise.all(sites.map(get));
  return { j: j as Uint8Array, k: k as Uint8Array };
}
