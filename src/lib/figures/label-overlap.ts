interface PlacedText {
  x: number;
  y: number;
  anchor: 'start' | 'middle' | 'end';
  text: string;
}

/** Average advance of the interface's type at 1 px. */
const advance = 0.58;

/**
 * Which of the placed labels can be read: each keeps clear of those before it. What is left out
 * must stand elsewhere, such as in the figure's table.
 */
export function readableLabels(labels: readonly PlacedText[], fontPx: number): boolean[] {
  const kept: { left: number; right: number; top: number; bottom: number }[] = [];
  return labels.map(({ x, y, anchor, text }) => {
    const width = text.length * fontPx * advance;
    const left = x - { start: 0, middle: 0.5, end: 1 }[anchor] * width;
    const box = { left, right: left + width, top: y - fontPx * 0.75, bottom: y + fontPx * 0.15 };
    const isClear = kept.every(
      (other) =>
        box.right <= other.left ||
        other.right <= box.left ||
        box.bottom <= other.top ||
        other.bottom <= box.top,
    );
    if (isClear) kept.push(box);
    return isClear;
  });
}
