import { error } from '@sveltejs/kit';
import { ResultRefused } from './refused';

/** A refused result as the API's one shape of error; anything else goes on as it is. */
export function answerRefusal(thrown: unknown): never {
  if (thrown instanceof ResultRefused) error(422, { code: thrown.code, message: thrown.message });
  throw thrown;
}
