import { isActionFailure, isHttpError, isRedirect, type RequestEvent } from '@sveltejs/kit';
import { session } from '$lib/server/hooks/session';
import type { RequestParts } from '../access-table';
import { CookieJar } from './cookie-jar';
import { layoutsAbove, type RouteFile } from './handlers';

/** What a handler answered, whatever way it did. */
export interface Answer {
  status: number;
  location: string | null;
  /** Everything the asker gets to see, as text. */
  text: string;
}

interface Call {
  route: RouteFile;
  handler: string;
  /** For `parent()`. */
  routes: RouteFile[];
  /** Those of the actor; empty for the signed-out. */
  cookies: CookieJar;
  parts: RequestParts;
}

const origin = 'http://localhost:3000';

/**
 * Calls one handler as kit would, with the application's own session hook in front, and with
 * nothing else in front: no layout, so that a handler without a guard of its own is found out.
 */
export async function call({ route, handler, routes, cookies, parts }: Call): Promise<Answer> {
  const url = new URL(pathOf(route.routeId, parts.params ?? {}) + searchOf(handler, parts), origin);
  const event = {
    request: requestOf(handler, url, parts),
    url,
    params: parts.params ?? {},
    route: { id: route.routeId },
    cookies,
    locals: { requestId: 'test', theme: 'system' } as App.Locals,
    platform: undefined,
    isDataRequest: false,
    isSubRequest: false,
    getClientAddress: () => '127.0.0.1',
    setHeaders: () => undefined,
    depends: () => undefined,
    untrack: <T>(read: () => T): T => read(),
    fetch,
    parent: async () => {
      const data = {};
      for (const layout of layoutsAbove(route, routes)) {
        Object.assign(data, await layout.handlers.get('load')?.(event));
      }
      return data;
    },
  };
  let answer: Answer = { status: 500, location: null, text: 'not called' };
  await session({
    event: event as unknown as RequestEvent,
    resolve: async () => {
      answer = await outcome(() => route.handlers.get(handler)!(event));
      return new Response();
    },
  });
  return answer;
}

async function outcome(run: () => unknown): Promise<Answer> {
  try {
    return await read(await run());
  } catch (thrown) {
    if (isRedirect(thrown)) return { status: thrown.status, location: thrown.location, text: '' };
    if (isHttpError(thrown)) {
      return { status: thrown.status, location: null, text: JSON.stringify(thrown.body) };
    }
    throw thrown;
  }
}

async function read(value: unknown): Promise<Answer> {
  if (value instanceof Response) {
    return {
      status: value.status,
      location: value.headers.get('location'),
      text: await value.text(),
    };
  }
  if (isActionFailure(value)) {
    return { status: value.status, location: null, text: JSON.stringify(value.data) };
  }
  return { status: 200, location: null, text: JSON.stringify(value) ?? '' };
}

/** "/(app)/studies/[studyId=uuid]" with its groups left out and its parameters filled in. */
function pathOf(routeId: string, params: Record<string, string>): string {
  const segments = routeId.split('/').filter((part) => part !== '' && !/^\(.*\)$/.test(part));
  const filled = segments.map((part) =>
    part.replace(/\[+(?:\.\.\.)?(\w+)(?:=\w+)?\]+/g, (_, name: string) => {
      if (params[name] === undefined) throw new Error(`the table gives no ${name} for ${routeId}`);
      return params[name];
    }),
  );
  return `/${filled.join('/')}`;
}

function searchOf(handler: string, { search = '' }: RequestParts): string {
  const action = handler.startsWith('actions.') ? handler.slice('actions.'.length) : null;
  if (action === null || action === 'default') return search;
  return `?/${action}${search.replace('?', '&')}`;
}

function requestOf(handler: string, url: URL, parts: RequestParts): Request {
  const method = handler === 'load' ? 'GET' : handler.startsWith('actions.') ? 'POST' : handler;
  const headers = new Headers({ origin, ...parts.headers });
  if (method === 'GET' || method === 'HEAD') return new Request(url, { method, headers });
  let body = parts.body ?? null;
  if (parts.form) body = new URLSearchParams(parts.form);
  else if (handler.startsWith('actions.')) body ??= new URLSearchParams();
  if (parts.json !== undefined) {
    body = JSON.stringify(parts.json);
    headers.set('content-type', 'application/json');
  }
  return new Request(url, { method, headers, body });
}
