import type { Cookies } from '@sveltejs/kit';
import { themeSchema, type Theme } from '$lib/model/theme';
import { config } from './config';

const cookieName = 'nullwright_theme';

export function readTheme(cookies: Cookies): Theme {
  const parsed = themeSchema.safeParse(cookies.get(cookieName));
  return parsed.success ? parsed.data : 'system';
}

export function keepTheme(cookies: Cookies, theme: Theme): void {
  cookies.set(cookieName, theme, {
    path: '/',
    httpOnly: true,
    sameSite: 'lax',
    secure: config.origin.startsWith('https:'),
    maxAge: 365 * 24 * 3600,
  });
}
