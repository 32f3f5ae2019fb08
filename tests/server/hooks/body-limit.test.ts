import type { RequestEvent } from '@sveltejs/kit';
import { describe, expect, it } from 'vitest';
import { bodyLimit } from '$lib/server/hooks/body-limit';

/** What comes of a request that states this many bytes; `null` states nothing. */
async function asked(method: string, routeId: string, bytes: number | null): Promise<number> {
  const request = new Request('http://localhost/', {
    method,
    body: 'x',
    headers: bytes === null ? {} : { 'content-length': String(bytes) },
  });
  const event = { request, route: { id: routeId } } as unknown as RequestEvent;
  const response = await bodyLimit({ event, resolve: () => new Response(null, { status: 204 }) });
  return response.status;
}

const map = '/api/runs/[runId=uuid]/maps/[name]';
const draft = '/api/contrasts/[contrastId=uuid]/draft';

describe('the limit of a request body', () => {
  it('is small for forms and JSON, and larger where sidecars, drafts and results come', async () => {
    expect(await asked('POST', '/(auth)/sign-in', 2_000_000)).toBe(204);
    expect(await asked('POST', '/(auth)/sign-in', 2_000_001)).toBe(413);
    expect(await asked('PATCH', '/api/runs/[runId=uuid]', 2_000_001)).toBe(413);
    expect(await asked('PUT', draft, 32_000_000)).toBe(204);
    expect(await asked('PUT', draft, 32_000_001)).toBe(413);
    expect(await asked('PUT', '/api/runs/[runId=uuid]/result', 500_000_000)).toBe(413);
  });

  it('leaves what is streamed to the disk to its own checks', async () => {
    expect(await asked('PUT', map, 500_000_000)).toBe(204);
    expect(await asked('PATCH', '/api/uploads/[...path]', null)).toBe(204);
  });

  it('lets no body of unstated length into memory', async () => {
    expect(await asked('POST', '/(auth)/sign-in', null)).toBe(411);
    expect(await asked('PUT', draft, null)).toBe(411);
    expect(await asked('POST', '/(auth)/sign-in', NaN)).toBe(413);
  });
});
