import { building } from '$app/environment';
import { env } from '$env/dynamic/private';
import { readConfig } from './config-schema';

/** Validated once, when the server starts; a wrong variable ends the start with its name. */
export const config = readConfig(
  building ? { DATABASE_URL: 'postgres://build.invalid/none' } : env,
);
