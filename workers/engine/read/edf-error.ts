/** What is wrong with an EDF file; stable, for code that decides what to say or do. */
export type EdfErrorCode =
  | 'not-edf'
  | 'too-short'
  | 'header-number'
  | 'header-size'
  | 'signal-count'
  | 'record-duration'
  | 'no-records'
  | 'record-time'
  | 'too-many-gaps'
  | 'signal-scale'
  | 'too-many-annotations';

/** The file cannot be read; `offset` is the byte at which that shows. */
export class EdfError extends Error {
  override readonly name = 'EdfError';

  constructor(
    readonly code: EdfErrorCode,
    readonly offset: number,
    what: string,
  ) {
    super(`${what} (at byte ${offset})`);
  }
}

/** Something odd that does not keep the file from being read. */
export interface Notice {
  code: string;
  message: string;
}
