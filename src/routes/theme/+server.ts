import { error, redirect } from '@sveltejs/kit';
import { themeSchema } from '$lib/model/theme';
import { nextPath } from '$lib/server/accounts/next-path';
import { keepTheme } from '$lib/server/theme';

/** Light, dark or the system's choice; for everybody, signed in or not. */
export async function POST({ request, cookies }) {
  const form = await request.formData();
  const theme = themeSchema.safeParse(form.get('theme'));
  if (!theme.success) {
    error(400, { code: 'invalid', message: 'theme must be light, dark or system.' });
  }
  keepTheme(cookies, theme.data);
  redirect(303, nextPath(String(form.get('next') ?? '')));
}
