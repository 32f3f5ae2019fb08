import { fileURLToPath } from 'node:url';

/** The project's folder, with no trailing slash. */
export const root = fileURLToPath(new URL('../..', import.meta.url)).replace(/\/$/, '');
