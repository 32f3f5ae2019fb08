export interface ToastMessage {
  id: number;
  tone: 'ok' | 'attention' | 'bad';
  text: string;
  /** For instance an undo. */
  action?: { label: string; run: () => void };
}

/**
 * Short confirmations of what was just done. Errors that need a decision belong on the page,
 * beside their cause; a toast with an action stays until it is used or dismissed.
 */
class Toasts {
  list = $state<ToastMessage[]>([]);
  #next = 1;

  show(text: string, options: Partial<Pick<ToastMessage, 'tone' | 'action'>> = {}): number {
    const id = this.#next++;
    const { tone = 'ok', action } = options;
    this.list.push(action ? { id, tone, text, action } : { id, tone, text });
    if (!action && tone === 'ok') setTimeout(() => this.dismiss(id), 6000);
    return id;
  }

  dismiss(id: number): void {
    this.list = this.list.filter((message) => message.id !== id);
  }
}

export const toasts = new Toasts();
