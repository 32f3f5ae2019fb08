import { shellData } from '$lib/server/shell';

export function load({ locals }) {
  return shellData(locals);
}
