import type { PairBlock } from '$engine';
import { npyParts } from '$workers/engine/npy';
import { mapField, mapShape, sentMapNames } from '$lib/model/run-maps';
import type { Axes } from '$engine';
import type { RunSummary } from '$lib/model/run';
import { putMap, putResult } from './run-api';

/** Sends a run's maps one after the other, then the summary that makes the server check them. */
export async function upload(
  runId: string,
  axes: Axes,
  result: { maps: PairBlock; phases: Uint8Array },
  summary: RunSummary,
  onProgress: (sentBytes: number, totalBytes: number) => void,
): Promise<void> {
  const epochCount = summary.keptA + summary.keptB;
  const files = sentMapNames.map((name) => {
    const data = name === 'phases' ? result.phases : result.maps[mapField[name]];
    const parts = npyParts(data, mapShape(name, axes, epochCount));
    return { name, file: new Blob(parts as BlobPart[]) };
  });
  const total = files.reduce((sum, { file }) => sum + file.size, 0);
  let sent = 0;
  onProgress(sent, total);
  for (const { name, file } of files) {
    await putMap(runId, name, file);
    sent += file.size;
    onProgress(sent, total);
  }
  await putResult(runId, summary);
}
