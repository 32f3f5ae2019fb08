import type { Handle } from '@sveltejs/kit';
import { config } from '../config';

// The content security policy stands in svelte.config.js: kit adds the nonces of its own scripts.
const headers: Record<string, string> = {
  // Workers share phasors through SharedArrayBuffer, which needs a cross-origin isolated page.
  'Cross-Origin-Opener-Policy': 'same-origin',
  'Cross-Origin-Embedder-Policy': 'require-corp',
  'Cross-Origin-Resource-Policy': 'same-origin',
  'X-Content-Type-Options': 'nosniff',
  'X-Frame-Options': 'DENY',
  // Links in mails carry tokens in their path; no other site is to see them.
  'Referrer-Policy': 'same-origin',
  'Permissions-Policy': 'camera=(), microphone=(), geolocation=(), payment=(), usb=()',
};

if (config.origin.startsWith('https:')) {
  headers['Strict-Transport-Security'] = 'max-age=31536000';
}

export const securityHeaders: Handle = async ({ event, resolve }) => {
  const response = await resolve(event);
  for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
  return response;
};
