import {
  elementScroll,
  observeElementOffset,
  observeElementRect,
  Virtualizer,
  type VirtualItem,
} from '@tanstack/virtual-core';

interface Options {
  count: () => number;
  element: () => HTMLElement | null;
  rowPx: number;
}

/** Which rows of a long table are to be drawn, and the room that the others take. */
export class VirtualRows {
  items = $state.raw<VirtualItem[]>([]);
  total = $state(0);
  readonly #virtualizer: Virtualizer<HTMLElement, Element>;

  constructor({ count, element, rowPx }: Options) {
    const options = () => ({
      count: count(),
      getScrollElement: element,
      estimateSize: () => rowPx,
      overscan: 12,
      scrollToFn: elementScroll,
      observeElementRect,
      observeElementOffset,
      // Before the browser has measured: what a first view can show.
      initialRect: { width: 1200, height: 560 },
      onChange: () => this.#read(),
    });
    this.#virtualizer = new Virtualizer<HTMLElement, Element>(options());
    this.#read();
    $effect(() => this.#virtualizer._didMount());
    $effect.pre(() => {
      this.#virtualizer.setOptions(options());
      this.#virtualizer.measure();
      this.#read();
    });
    $effect(() => {
      count();
      element();
      this.#virtualizer._willUpdate();
    });
  }

  scrollTo(index: number): void {
    this.#virtualizer.scrollToIndex(index, { align: 'auto' });
  }

  get before(): number {
    return this.items[0]?.start ?? 0;
  }

  get after(): number {
    return this.total - (this.items.at(-1)?.end ?? 0);
  }

  #read(): void {
    this.items = this.#virtualizer.getVirtualItems();
    this.total = this.#virtualizer.getTotalSize();
  }
}
