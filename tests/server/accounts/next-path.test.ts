import { describe, expect, it } from 'vitest';
import { nextPath } from '$lib/server/accounts';

describe('nextPath', () => {
  it.each(['/studies', '/contrasts/1/result?correction=max#edges', '/team?before=7'])(
    'keeps the local path %s',
    (path) => {
      expect(nextPath(path)).toBe(path);
    },
  );

  // What browsers read as another site, though it begins with a slash.
  it.each([
    'https://elsewhere.example/',
    '//elsewhere.example',
    '/\\elsewhere.example',
    '\\\\elsewhere.example',
    '/\t/elsewhere.example',
    '/./\\elsewhere.example',
    '/.//elsewhere.example',
    '/a/..//elsewhere.example',
    'javascript:alert(1)',
    'studies',
    '',
    null,
    undefined,
  ])('falls back to the studies for %j', (wanted) => {
    expect(nextPath(wanted)).toBe('/studies');
  });
});
