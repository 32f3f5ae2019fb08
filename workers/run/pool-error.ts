/** Why a pool gives no more answers; what a part of the work throws itself is passed on as it is. */
export class PoolError extends Error {
  override readonly name = 'PoolError';

  constructor(
    readonly code: 'cancelled' | 'worker-crashed',
    message: string,
  ) {
    super(message);
  }
}
