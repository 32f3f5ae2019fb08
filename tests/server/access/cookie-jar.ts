import type { Cookies } from '@sveltejs/kit';

/** Kit's cookies of one request, without the headers: what was set can be read again. */
export class CookieJar implements Cookies {
  readonly values = new Map<string, string>();
  readonly attributes = new Map<string, object>();

  get(name: string): string | undefined {
    return this.values.get(name);
  }

  getAll(): { name: string; value: string }[] {
    return [...this.values].map(([name, value]) => ({ name, value }));
  }

  set(name: string, value: string, attributes: object): void {
    // A browser drops a cookie whose time is up.
    if ('maxAge' in attributes && attributes.maxAge === 0) this.values.delete(name);
    else this.values.set(name, value);
    this.attributes.set(name, attributes);
  }

  delete(name: string): void {
    this.values.delete(name);
  }

  serialize(name: string, value: string): string {
    return `${name}=${encodeURIComponent(value)}`;
  }
}
