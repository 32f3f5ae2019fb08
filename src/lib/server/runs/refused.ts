export type RefusalCode =
  | 'plan-mismatch'
  | 'engine-mismatch'
  | 'epochs-mismatch'
  | 'distribution-wrong'
  | 'map-missing'
  | 'map-shape'
  | 'map-value'
  | 'map-changed'
  | 'digest-mismatch';

/** A result that does not fit its plan. The message names what, the value found, and what is due. */
export class ResultRefused extends Error {
  override readonly name = 'ResultRefused';

  constructor(
    readonly code: RefusalCode,
    message: string,
  ) {
    super(message);
  }
}
