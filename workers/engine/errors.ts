/**
 * A plan that does not fit its recordings. `field` is the path in the plan ("times.stepS"), so that
 * a form can put the message where it belongs; the message says field, value and remedy.
 */
export class PlanError extends RangeError {
  override readonly name = 'PlanError';

  constructor(
    readonly field: string,
    message: string,
  ) {
    super(message);
  }
}
