export type IngestErrorCode = 'unreadable' | 'bad-sidecar' | 'bad-participant' | 'bad-name';

/** A recording that cannot be taken in as it is; the message says why and what to do. */
export class IngestError extends Error {
  override readonly name = 'IngestError';

  constructor(
    readonly code: IngestErrorCode,
    message: string,
  ) {
    super(message);
  }

  /** The file itself is of no use; other faults can be mended without sending it again. */
  get spoilsFile(): boolean {
    return this.code === 'unreadable';
  }
}
