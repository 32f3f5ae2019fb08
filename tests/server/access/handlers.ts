import { readdirSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';

const routesFolder = fileURLToPath(new URL('../../../src/routes', import.meta.url));

/** A load, an action or an endpoint as kit would call it. */
export type Handler = (event: unknown) => unknown;

export interface RouteFile {
  /** Below src/routes, for instance "(app)/team/+page.server.ts": the key of the table. */
  file: string;
  /** As kit names it, for instance "/(app)/team". */
  routeId: string;
  /** "load", "GET", "actions.invite". */
  handlers: Map<string, Handler>;
}

const serverFile = /^\+(page|layout)\.server\.ts$|^\+server\.ts$/;
// What kit reads from these files besides handlers (kit's documentation, page options).
const options = new Set(['prerender', 'csr', 'ssr', 'trailingSlash', 'config', 'entries']);

/** Every file of src/routes that runs on the server, found on disk, with all of its handlers. */
export async function readRoutes(): Promise<RouteFile[]> {
  const files = readdirSync(routesFolder, { recursive: true, encoding: 'utf8' })
    .filter((file) => serverFile.test(path.basename(file)))
    .sort();
  return Promise.all(files.map(readRoute));
}

async function readRoute(file: string): Promise<RouteFile> {
  const module: Record<string, unknown> = await import(path.join(routesFolder, file));
  const handlers = new Map<string, Handler>();
  for (const [name, value] of Object.entries(module)) {
    if (name === 'actions') {
      for (const [action, handler] of Object.entries(value as Record<string, Handler>)) {
        handlers.set(`actions.${action}`, handler);
      }
    } else if (typeof value === 'function') {
      handlers.set(name, value as Handler);
    } else if (!options.has(name)) {
      throw new Error(`${file} exports ${name}, which is neither a handler nor an option of kit.`);
    }
  }
  const folder = path.dirname(file);
  return { file, routeId: folder === '.' ? '/' : `/${folder}`, handlers };
}

/** The layout loads above a file, outermost first: what its `parent()` waits for. */
export function layoutsAbove(route: RouteFile, routes: RouteFile[]): RouteFile[] {
  const own = path.basename(route.file).startsWith('+layout');
  return routes
    .filter((one) => path.basename(one.file) === '+layout.server.ts')
    .filter((one) => {
      if (one.file === route.file) return false;
      const below = one.routeId === '/' ? '/' : `${one.routeId}/`;
      return `${route.routeId}/`.startsWith(below) && !(own && one.routeId === route.routeId);
    })
    .sort((x, y) => x.routeId.length - y.routeId.length);
}
