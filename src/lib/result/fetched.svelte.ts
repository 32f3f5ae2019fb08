/** Arrow keys pass many keys by; only one that is stayed on is fetched. */
const restMs = 60;

/**
 * One thing fetched by key, with its states. What was shown stays until the next has arrived, so
 * that walking with the arrow keys does not flicker; it is `stale` meanwhile, to be drawn dim.
 */
export class Fetched<Value> {
  status = $state.raw<'idle' | 'loading' | 'ready' | 'failed'>('idle');
  value = $state.raw<Value | null>(null);
  message = $state.raw('');

  readonly #get: (key: string, signal: AbortSignal) => Promise<Value>;
  readonly #kept: { key: string; value: Value }[] = [];
  #wanted: string | null = null;
  #under: AbortController | null = null;

  constructor(get: (key: string, signal: AbortSignal) => Promise<Value>) {
    this.#get = get;
  }

  /** What is shown belongs to the key before. */
  get stale(): boolean {
    return this.status === 'loading' && this.value !== null;
  }

  want(key: string): void {
    if (key === this.#wanted) return;
    this.#wanted = key;
    this.#under?.abort();
    const kept = this.#kept.find((one) => one.key === key);
    if (kept) this.#show(kept.value);
    else void this.#load(key);
  }

  retry(): void {
    if (this.#wanted !== null) void this.#load(this.#wanted);
  }

  async #load(key: string): Promise<void> {
    const under = new AbortController();
    this.#under = under;
    this.status = 'loading';
    try {
      if (this.value !== null) await rest(under.signal);
      const value = await this.#get(key, under.signal);
      this.#keep(key, value);
      if (key === this.#wanted) this.#show(value);
    } catch (reason) {
      if (under.signal.aborted || key !== this.#wanted) return;
      // Never another pair's numbers under this pair's name.
      this.value = null;
      this.status = 'failed';
      this.message = reason instanceof Error ? reason.message : String(reason);
    }
  }

  #show(value: Value): void {
    this.value = value;
    this.status = 'ready';
  }

  /** A finished run never changes; only memory limits what is kept. */
  #keep(key: string, value: Value): void {
    this.#kept.push({ key, value });
    if (this.#kept.length > 24) this.#kept.shift();
  }
}

function rest(signal: AbortSignal): Promise<void> {
  return new Promise((resolve, reject) => {
    const timer = setTimeout(resolve, restMs);
    signal.addEventListener('abort', () => {
      clearTimeout(timer);
      reject(new DOMException('passed by', 'AbortError'));
    });
  });
}
