import type { TraceView } from './trace-view.svelte';

/** How far a pointer may move and still press rather than drag, pixels. */
const PRESS_PX = 4;

/**
 * Wheel, drag and pinch on the traces. A plain wheel scrolls the page until the figure has the
 * focus; Shift or a sideways wheel scrolls in time, Ctrl zooms about the pointer, Alt scales rows.
 * `onPress` hears of presses that moved nothing. Returns how to detach.
 */
export function attachGestures(
  element: HTMLElement,
  view: TraceView,
  onPress: (x: number, y: number) => void,
): () => void {
  const pointers = new Map<number, { x: number; y: number }>();
  let moved = 0;

  const secondsPerPixel = () => view.target.widthS / Math.max(1, element.clientWidth);
  const timeAt = (clientX: number) =>
    view.target.startS + (clientX - element.getBoundingClientRect().left) * secondsPerPixel();

  function wheel(event: WheelEvent) {
    // Lines and pages of wheels that do not count in pixels.
    const unit = event.deltaMode === 1 ? 16 : event.deltaMode === 2 ? 400 : 1;
    const along = event.deltaX * unit;
    const down = event.deltaY * unit;
    if (event.ctrlKey || event.metaKey) {
      view.zoom(
        Math.exp(Math.max(-120, Math.min(120, down)) * 0.004),
        timeAt(event.clientX),
        'once',
      );
    } else if (event.altKey) {
      if (Math.abs(down) > 3) view.scaleRows(down > 0 ? 1 : -1);
    } else if (Math.abs(along) > Math.abs(down)) {
      view.pan(along * secondsPerPixel(), 'once');
    } else if (event.shiftKey || element.ownerDocument.activeElement === element) {
      view.pan(down * secondsPerPixel(), 'once');
    } else return;
    event.preventDefault();
  }

  function down(event: PointerEvent) {
    if (event.pointerType === 'mouse' && event.button !== 0) return;
    if (pointers.size === 0) moved = 0;
    pointers.set(event.pointerId, { x: event.clientX, y: event.clientY });
    element.setPointerCapture(event.pointerId);
  }

  function move(event: PointerEvent) {
    const before = pointers.get(event.pointerId);
    if (!before) return;
    const now = { x: event.clientX, y: event.clientY };
    moved += Math.abs(now.x - before.x) + Math.abs(now.y - before.y);
    const other = [...pointers].find(([id]) => id !== event.pointerId)?.[1];
    pointers.set(event.pointerId, now);
    if (other) {
      const apart = (one: { x: number }) => Math.max(8, Math.abs(one.x - other.x));
      view.zoom(apart(before) / apart(now), timeAt((now.x + other.x) / 2), 'once');
    } else if (moved > PRESS_PX) {
      view.pan((before.x - now.x) * secondsPerPixel(), 'once');
    }
  }

  function up(event: PointerEvent) {
    if (!pointers.delete(event.pointerId)) return;
    const box = element.getBoundingClientRect();
    const isPress = event.type === 'pointerup' && moved <= PRESS_PX && pointers.size === 0;
    if (isPress) onPress(event.clientX - box.left, event.clientY - box.top);
  }

  element.addEventListener('wheel', wheel, { passive: false });
  element.addEventListener('pointerdown', down);
  element.addEventListener('pointermove', move);
  element.addEventListener('pointerup', up);
  element.addEventListener('pointercancel', up);
  return () => {
    element.removeEventListener('wheel', wheel);
    element.removeEventListener('pointerdown', down);
    element.removeEventListener('pointermove', move);
    element.removeEventListener('pointerup', up);
    element.removeEventListener('pointercancel', up);
  };
}
