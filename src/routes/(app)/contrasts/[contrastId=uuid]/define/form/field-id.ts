/** The control's id in the page, so that an issue in a list can lead to its field. */
export function fieldId(field: string): string {
  return `field-${field.replaceAll('.', '-')}`;
}

/** Moves the focus to a field, or to the nearest group above it that the page has. */
export function focusField(field: string): void {
  const parts = field.split('.');
  for (let length = parts.length; length > 0; length--) {
    const element = document.getElementById(fieldId(parts.slice(0, length).join('.')));
    if (!element) continue;
    const control = element.matches('input, select, textarea, button, [tabindex]')
      ? element
      : element.querySelector<HTMLElement>('input, select, textarea, button');
    element.scrollIntoView({ block: 'center' });
    control?.focus({ preventScroll: true });
    return;
  }
}
