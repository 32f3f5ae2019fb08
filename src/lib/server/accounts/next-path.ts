/**
 * Where to go after signing in: a path of this application, never another site. Browsers read
 * "\" as "/" and drop tabs and line ends, so the address is resolved as they would.
 */
export function nextPath(wanted: string | null | undefined, fallback = '/studies'): string {
  if (!wanted?.startsWith('/')) return fallback;
  const here = 'http://here.invalid';
  let url: URL;
  try {
    url = new URL(wanted, here);
  } catch {
    return fallback;
  }
  // A path that itself begins with two slashes would be read as another host.
  if (url.origin !== here || url.pathname.startsWith('//')) return fallback;
  return url.pathname + url.search + url.hash;
}
