import { PoolError } from '$workers/run/pool-error';

/** What can go wrong on the browser's side of a run; the page words the remedy by the code. */
export type RunErrorCode =
  | 'not-isolated'
  | 'elsewhere'
  | 'network'
  | 'signed-out'
  | 'recording-missing'
  | 'recording-changed'
  | 'no-epochs'
  | 'engine'
  | 'worker-crashed'
  | 'refused'
  | 'cancelled';

export class RunError extends Error {
  override readonly name = 'RunError';

  constructor(
    readonly code: RunErrorCode,
    message: string,
    options?: ErrorOptions,
  ) {
    super(message, options);
  }
}

/** Would the same happen again, whatever is tried? Then a new plan or a new run is the remedy. */
export function isFinal(code: RunErrorCode): boolean {
  return code === 'refused' || code === 'no-epochs';
}

/** Any thrown value as a RunError; what carries no code of ours came from the engine. */
export function asRunError(thrown: unknown): RunError {
  if (thrown instanceof RunError) return thrown;
  if (thrown instanceof PoolError) return new RunError(thrown.code, thrown.message);
  const message = thrown instanceof Error ? thrown.message : String(thrown);
  return new RunError('engine', message, { cause: thrown });
}
