import type { Handle } from '@sveltejs/kit';
import { readTheme } from '../theme';

/** The chosen theme is in the first byte of the page: nothing flashes. */
export const theme: Handle = ({ event, resolve }) => {
  event.locals.theme = readTheme(event.cookies);
  return resolve(event, {
    transformPageChunk: ({ html }) => html.replace('%nullwright.theme%', event.locals.theme),
  });
};
