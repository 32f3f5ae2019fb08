import { sequence } from '@sveltejs/kit/hooks';
import { bodyLimit } from '$lib/server/hooks/body-limit';
import { logLine } from '$lib/server/hooks/log-line';
import { requestId } from '$lib/server/hooks/request-id';
import { securityHeaders } from '$lib/server/hooks/security-headers';
import { session } from '$lib/server/hooks/session';
import { theme } from '$lib/server/hooks/theme';

export { handleError } from '$lib/server/hooks/handle-error';
export { init } from '$lib/server/hooks/init';

// In this order: each may rely on what the ones before it put into locals.
export const handle = sequence(requestId, logLine, securityHeaders, bodyLimit, session, theme);
