import { deserialize } from '$app/forms';
import { toasts } from '$lib/ui/toasts.svelte';

interface MarkedChannel {
  site: string;
  bad: boolean;
}

/** Which channels are bad: changed at once, saved behind it, and taken back when saving fails. */
export class ChannelMarks<Channel extends MarkedChannel> {
  channels: Channel[];
  private undoToast: number | null = null;

  constructor(channels: Channel[]) {
    const own = $state(channels.map((channel) => ({ ...channel })));
    this.channels = own;
  }

  readonly badCount = $derived.by(() => this.channels.filter((channel) => channel.bad).length);

  async mark(site: string, bad: boolean): Promise<void> {
    const channel = this.channels.find((one) => one.site === site);
    if (!channel || channel.bad === bad) return;
    channel.bad = bad;
    if (this.undoToast !== null) toasts.dismiss(this.undoToast);
    if (await save(site, bad)) {
      this.undoToast = toasts.show(`${site} is marked ${bad ? 'bad' : 'good'}.`, {
        action: { label: 'Undo', run: () => void this.mark(site, !bad) },
      });
    } else {
      channel.bad = !bad;
      toasts.show(`${site} could not be saved and is as before. Try again.`, { tone: 'bad' });
    }
  }
}

async function save(site: string, bad: boolean): Promise<boolean> {
  const body = new FormData();
  body.set('site', site);
  body.set('bad', String(bad));
  const headers = { 'x-sveltekit-action': 'true' };
  const response = await fetch('?/mark', { method: 'POST', headers, body }).catch(() => null);
  return response !== null && deserialize(await response.text()).type === 'success';
}
