/** From a recording's bytes and its sidecars to facts and samples. */
export { bytesOf, bytesOfBlob, type ByteSource } from './byte-source';
export { EdfError, type EdfErrorCode, type Notice } from './edf-error';
export { EdfFile, openEdf, type EdfAnnotation } from './edf';
export type { EdfFormat } from './edf-header';
export type { EdfSegment } from './edf-segments';
export type { EdfSignal } from './edf-signals';
export {
  blankIdentification,
  identificationOf,
  type Identification,
  type IdentificationPart,
} from './identification';
export { channelTypes, guessChannelType, type ChannelType } from './channel-type';
export { positionOfSite, siteOf } from './sites';
export { sitePositions, type Position } from './positions';
export {
  parseChannels,
  parseElectrodes,
  parseEvents,
  parseParticipants,
  type SidecarChannel,
  type SidecarElectrode,
  type SidecarParticipant,
} from './bids';
export { SidecarError } from './sidecar-error';
export { projectElectrodes } from './electrodes';
export { factsOf, type DescribedChannel, type DescribedRecording, type Sidecars } from './facts';
export { edfChunks, writeEdf, type WritableEdf, type WritableSignal } from './write-edf';
