import { parseChannels, parseElectrodes, parseEvents, SidecarError, type Sidecars } from '$engine';
import type { SidecarKind } from '$lib/model/bids-names';
import { IngestError } from './ingest-error';

export interface SidecarFile {
  /** For messages. */
  name: string;
  bytes: Uint8Array;
}

export type SidecarFiles = Partial<Record<SidecarKind, SidecarFile>>;

/** Parses what was given; throws IngestError naming file, line, value and remedy. */
export function readSidecars({ events, channels, electrodes }: SidecarFiles): Sidecars {
  try {
    return {
      ...(events && { events: parseEvents(events.name, events.bytes) }),
      ...(channels && { channels: parseChannels(channels.name, channels.bytes) }),
      ...(electrodes && { electrodes: parseElectrodes(electrodes.name, electrodes.bytes) }),
    };
  } catch (reason) {
    if (reason instanceof SidecarError) throw new IngestError('bad-sidecar', reason.message);
    throw reason;
  }
}
