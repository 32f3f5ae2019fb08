import { planDraftSchema, type PlanDraft } from '$lib/model/plan-draft';
import { forgetKept, keepDraft } from './draft-keeper';

const quietMs = 1000;
const retryMs = 10_000;
/** Browsers refuse requests that outlive their page above 64 KiB; characters may take 2 bytes. */
const mostKeptAlive = 30_000;

export interface NewerDraft {
  draft: PlanDraft;
  revision: number;
  savedAt: string;
  savedByName: string;
}

type SaveState = 'saved' | 'waiting' | 'saving' | 'failed' | 'newer' | 'locked' | 'signed-out';

interface Reply {
  state: 'saved' | 'newer' | 'locked';
  revision: number;
  savedAt: string;
  savedByName: string;
  draft: unknown;
}

export interface SaveTarget {
  contrastId: string;
  version: number;
  revision: number;
  /** ISO 8601. */
  savedAt: string;
}

/**
 * Sends the draft to the server shortly after the last edit. What cannot be sent stays in this
 * browser and is tried again; what somebody else saved in between is never overwritten unasked.
 */
export class Autosave {
  state = $state<SaveState>('saved');
  savedAt = $state('');
  newer = $state.raw<NewerDraft | null>(null);
  /** The browser could not keep the unsent changes either. */
  unkept = $state(false);
  revision: number;
  readonly #target: SaveTarget;
  #pending: PlanDraft | null = null;
  #timer: ReturnType<typeof setTimeout> | undefined;
  #sending: Promise<void> | null = null;

  constructor(target: SaveTarget) {
    this.#target = target;
    this.revision = target.revision;
    this.savedAt = target.savedAt;
  }

  /** Takes note of a new state; it is sent when the typing pauses. */
  note(draft: PlanDraft): void {
    this.#pending = draft;
    if (this.state === 'newer' || this.state === 'locked') {
      this.#keep(draft);
      return;
    }
    this.state = 'waiting';
    this.#schedule(quietMs);
  }

  /** Sends what waits now; true when the server has everything. */
  async flush(leaving = false): Promise<boolean> {
    clearTimeout(this.#timer);
    // Two callers may wait for one request: the first to go on sends, the other waits again.
    while (this.#sending) await this.#sending;
    if (this.#pending && this.state !== 'newer' && this.state !== 'locked') {
      this.#sending = this.#send(this.#pending, leaving);
      await this.#sending;
      this.#sending = null;
      if (this.#pending && this.state === 'waiting') return this.flush(leaving);
    }
    return this.state === 'saved';
  }

  /** Keeps what waits before the page goes; the request may outlive the page. */
  leave(): void {
    if (!this.#pending || this.state === 'saved') return;
    this.#keep(this.#pending);
    void this.flush(true);
  }

  /** Goes on from the newer draft, whichever of the two is kept from now on. */
  settle(draft: PlanDraft, changed: boolean): void {
    if (this.newer) this.revision = this.newer.revision;
    this.newer = null;
    this.state = 'saved';
    forgetKept(this.#target.contrastId, this.#target.version);
    this.#pending = null;
    if (changed) this.note(draft);
  }

  stop(): void {
    clearTimeout(this.#timer);
  }

  #schedule(afterMs: number): void {
    clearTimeout(this.#timer);
    this.#timer = setTimeout(() => void this.flush(), afterMs);
  }

  #keep(draft: PlanDraft): void {
    const { contrastId, version } = this.#target;
    this.unkept = !keepDraft(contrastId, version, draft, this.revision);
  }

  async #send(draft: PlanDraft, leaving: boolean): Promise<void> {
    const { contrastId, version } = this.#target;
    this.state = 'saving';
    const body = JSON.stringify({ version, basedOn: this.revision, draft });
    try {
      const response = await fetch(`/api/contrasts/${contrastId}/draft`, {
        method: 'PUT',
        headers: { 'content-type': 'application/json' },
        body,
        keepalive: leaving && body.length < mostKeptAlive,
      });
      if (response.status !== 200 && response.status !== 409) {
        this.#fail(draft, response.status === 401 ? 'signed-out' : 'failed');
        return;
      }
      this.#take(draft, (await response.json()) as Reply);
    } catch {
      this.#fail(draft, 'failed');
    }
  }

  #take(sent: PlanDraft, reply: Reply): void {
    if (reply.state === 'saved') {
      this.revision = reply.revision;
      this.savedAt = reply.savedAt;
      this.unkept = false;
      forgetKept(this.#target.contrastId, this.#target.version);
      const more = this.#pending !== sent;
      if (!more) this.#pending = null;
      this.state = more ? 'waiting' : 'saved';
      return;
    }
    this.#keep(sent);
    this.state = reply.state;
    if (reply.state === 'newer') {
      this.newer = {
        draft: planDraftSchema.parse(reply.draft),
        revision: reply.revision,
        savedAt: reply.savedAt,
        savedByName: reply.savedByName,
      };
    }
  }

  #fail(draft: PlanDraft, state: 'failed' | 'signed-out'): void {
    this.#keep(draft);
    this.state = state;
    this.#schedule(retryMs);
  }
}
