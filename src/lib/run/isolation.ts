/** Why this page cannot share memory between workers, with the remedy; null when it can. */
export function isolationTrouble(): string | null {
  if (typeof SharedArrayBuffer !== 'undefined' && globalThis.crossOriginIsolated) return null;
  if (!globalThis.isSecureContext) {
    return 'This page was opened over plain HTTP, where browsers do not share memory between workers. Open it over HTTPS, or on the same machine as http://localhost.';
  }
  return 'This browser does not share memory between workers on this page. Use a current Firefox, Chrome, Edge or Safari; if it is one, a proxy may remove the headers Cross-Origin-Opener-Policy and Cross-Origin-Embedder-Policy, which the server sends.';
}
