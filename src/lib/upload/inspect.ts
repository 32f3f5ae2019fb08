import {
  bytesOfBlob,
  EdfError,
  identificationOf,
  openEdf,
  parseChannels,
  parseElectrodes,
  parseEvents,
  blankIdentification,
  type EdfFormat,
  type Identification,
  type Notice,
} from '$engine';
import { formatBytes } from '$lib/model/format';
import type { SidecarKind } from '$lib/model/bids-names';

/** What a person should know of a file before it leaves the machine. */
export interface Inspected {
  format: EdfFormat;
  durationS: number;
  channelCount: number;
  samplingRatesHz: number[];
  identification: Identification;
  notices: Notice[];
}

/** Why a file cannot be taken, in words with a remedy. */
export class FileProblem extends Error {
  override readonly name = 'FileProblem';
}

/** Reads a file's header in the browser. Throws FileProblem. */
export async function inspectRecording(file: File, limitBytes: number): Promise<Inspected> {
  if (file.size === 0) throw new FileProblem('The file is empty. Choose another one.');
  if (file.size > limitBytes) {
    throw new FileProblem(
      `The file has ${formatBytes(file.size)}; the limit is ${formatBytes(limitBytes)}. ` +
        'Split the recording, or ask whoever runs this server to raise UPLOAD_LIMIT_BYTES.',
    );
  }
  try {
    const edf = await openEdf(bytesOfBlob(file));
    const rates = new Set(edf.channels.map((channel) => channel.samplingRateHz));
    return {
      format: edf.format,
      durationS: edf.durationS,
      channelCount: edf.channels.length,
      samplingRatesHz: [...rates].sort((a, b) => a - b),
      identification: identificationOf(edf),
      notices: edf.notices,
    };
  } catch (reason) {
    if (reason instanceof EdfError) {
      throw new FileProblem(
        `This cannot be read as EDF: ${reason.message}. Export it again from its source.`,
      );
    }
    const detail = reason instanceof Error ? ` (${reason.message})` : '';
    throw new FileProblem(`The browser could not read the file${detail}. Choose it again.`);
  }
}

/** The file without the fields that identify a person; its other bytes are not copied. */
export async function blankedFile(file: File): Promise<Blob> {
  const headBytes = 256;
  const head = new Uint8Array(await file.slice(0, headBytes).arrayBuffer());
  const blanked = blankIdentification(head);
  return new Blob([blanked as Uint8Array<ArrayBuffer>, file.slice(headBytes)]);
}

/** A sidecar's text, checked here so that its errors show before anything is sent. */
export async function readSidecar(kind: SidecarKind, file: File): Promise<string> {
  const bytes = new Uint8Array(await file.arrayBuffer());
  const parse = { events: parseEvents, channels: parseChannels, electrodes: parseElectrodes }[kind];
  parse(file.name, bytes);
  return new TextDecoder().decode(bytes);
}
