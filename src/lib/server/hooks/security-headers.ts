import { subscribe } from 'node:diagnostics_channel';
import type { ServerResponse } from 'node:http';
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

/**
 * The built server sends its files without asking kit's hooks, yet an isolated page may only
 * start a worker whose script has these headers too. Node announces each request before anybody
 * answers it.
 */
export function setHeadersOfFiles(): void {
  subscribe('http.server.request.start', (message) => {
    const { response } = message as { response: ServerResponse };
    for (const [name, value] of Object.entries(headers)) response.setHeader(name, value);
  });
}
