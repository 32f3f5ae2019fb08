import { allow } from '$lib/server/access';
import { shellData } from '$lib/server/shell';

// No barrier: every load, action and endpoint below asks for itself.
export function load(event) {
  const member = allow(event, 'team.read');
  return { ...shellData(event.locals), member };
}
