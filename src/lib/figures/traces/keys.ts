import { firstEventAt, type TraceEvent } from './marks';
import type { TraceView } from './trace-view.svelte';

/** What each key does, in words, for the person and the screen reader. */
export const keyHelp =
  'Arrow left and right scroll, with Shift by a whole window; plus and minus zoom; 0 shows the ' +
  'whole recording; Home and End go to its ends; N and P go to the next and previous event; ' +
  'arrow up and down choose a channel, Page up and down turn through the channels; B marks or ' +
  'clears the chosen channel as bad; square brackets scale the rows.';

/** Does what a key asks for; false when it asks for nothing here. */
export function handleKey(
  event: KeyboardEvent,
  view: TraceView,
  actions: { events: readonly TraceEvent[]; toggleBad: () => void },
): boolean {
  if (event.ctrlKey || event.metaKey || event.altKey) return false;
  const { widthS } = view.target;
  const step = event.shiftKey ? widthS : widthS / 4;
  const todo: Record<string, () => void> = {
    ArrowLeft: () => view.pan(-step, 'ease'),
    ArrowRight: () => view.pan(step, 'ease'),
    ArrowUp: () => view.choose(view.chosen - 1),
    ArrowDown: () => view.choose(view.chosen + 1),
    PageUp: () => view.pageRows(-1),
    PageDown: () => view.pageRows(1),
    Home: () => view.show({ startS: view.startS, widthS }, 'ease'),
    End: () => view.show({ startS: view.endS, widthS }, 'ease'),
    '+': () => view.zoom(0.5, view.middleS, 'ease'),
    '=': () => view.zoom(0.5, view.middleS, 'ease'),
    '-': () => view.zoom(2, view.middleS, 'ease'),
    '0': () => view.show({ startS: view.startS, widthS: view.lengthS }, 'ease'),
    '[': () => view.scaleRows(1),
    ']': () => view.scaleRows(-1),
    n: () => goToEvent(view, actions.events, 1),
    p: () => goToEvent(view, actions.events, -1),
    b: actions.toggleBad,
    ' ': actions.toggleBad,
  };
  const action = todo[event.key.length === 1 ? event.key.toLowerCase() : event.key];
  if (!action) return false;
  action();
  return true;
}

/** Brings the next or previous event to the middle of the window. */
export function goToEvent(view: TraceView, events: readonly TraceEvent[], direction: 1 | -1): void {
  const slack = view.target.widthS / 1e4;
  const index =
    direction > 0
      ? firstEventAt(events, view.middleS + slack)
      : firstEventAt(events, view.middleS - slack) - 1;
  const event = events[index];
  if (event)
    view.show(
      { startS: event.onsetS - view.target.widthS / 2, widthS: view.target.widthS },
      'ease',
    );
}
