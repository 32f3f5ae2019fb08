import { parseParticipants, SidecarError } from '$engine';
import { fit, kindOf, participantIn, type SidecarKind } from '$lib/model/bids-names';
import { readSidecar } from './inspect';
import { UploadItem } from './upload-item.svelte';

/** A sidecar that waits for a person to say which recording it belongs to. */
export interface LooseSidecar {
  kind: SidecarKind;
  name: string;
  text: string;
}

const mostAtOnce = 2;

/** The files that were dropped for one study. Lives on while the person visits other pages. */
export class UploadQueue {
  items = $state<UploadItem[]>([]);
  loose = $state<LooseSidecar[]>([]);
  /** Files that cannot be used, with the reason. */
  refused = $state<{ name: string; reason: string }[]>([]);
  /** Codes from a participants.tsv that nobody has added yet. */
  offeredCodes = $state<string[]>([]);
  onStored: () => void = () => undefined;

  constructor(
    readonly studyId: string,
    private readonly limitBytes: number,
  ) {}

  readonly isBusy = $derived(this.items.some((item) => item.isBusy));
  readonly ready = $derived(this.items.filter((item) => item.status === 'ready'));

  /** Sorts dropped files out: recordings first, so that their sidecars find them. */
  async add(files: File[], knownCodes: string[]): Promise<void> {
    this.refused = [];
    const kinds = files.map((file) => ({ file, kind: kindOf(file.name) }));
    for (const { file, kind } of kinds) {
      if (kind === 'recording') this.addRecording(file, knownCodes);
      else if (kind === 'participants') await this.offerCodes(file);
      else if (kind === 'unknown') {
        const reason =
          'is neither EDF nor a BIDS sidecar (events, channels, electrodes, participants).';
        this.refused.push({ name: file.name, reason });
      }
    }
    for (const { file, kind } of kinds) {
      if (kind === 'events' || kind === 'channels' || kind === 'electrodes') {
        await this.addSidecar(kind, file);
      }
    }
  }

  private addRecording(file: File, knownCodes: string[]): void {
    const isSame = (item: UploadItem) =>
      item.name === file.name &&
      item.size === file.size &&
      item.file.lastModified === file.lastModified;
    if (this.items.some(isSame)) {
      this.refused.push({ name: file.name, reason: 'It is in the list already.' });
      return;
    }
    this.items.push(new UploadItem(file, this.studyId, this.limitBytes));
    // The reactive one, as the list holds it.
    const item = this.items.at(-1)!;
    item.participant = participantIn(file.name) ?? codeAtStart(file.name, knownCodes) ?? '';
    void item.inspect();
  }

  private async addSidecar(kind: SidecarKind, file: File): Promise<void> {
    await this.orRefuse(file, async () => {
      const sidecar = { kind, name: file.name, text: await readSidecar(kind, file) };
      const targets = this.targetsOf(sidecar.name);
      if (targets.length === 0) this.loose.push(sidecar);
      for (const item of targets) this.putBeside(item, sidecar);
    });
  }

  /** Sidecars that were dropped onto one recording. */
  async addTo(item: UploadItem, files: File[]): Promise<void> {
    this.refused = [];
    for (const file of files) {
      const kind = kindOf(file.name);
      if (kind !== 'events' && kind !== 'channels' && kind !== 'electrodes') {
        const reason = 'cannot stand beside a recording; events, channels and electrodes can.';
        this.refused.push({ name: file.name, reason });
        continue;
      }
      await this.orRefuse(file, async () => {
        const sidecar = { kind, name: file.name, text: await readSidecar(kind, file) };
        this.putBeside(item, sidecar, true);
      });
    }
  }

  /** Open recordings that the name fits; a bare "events.tsv" fits the only one there is. */
  private targetsOf(sidecarName: string): UploadItem[] {
    const open = this.items.filter((item) => item.status === 'reading' || item.isOpen);
    const fitting = open.filter((item) => fit(sidecarName, item.name) !== null);
    const exact = fitting.filter((item) => fit(sidecarName, item.name) === Infinity);
    if (exact.length > 0) return exact;
    if (fitting.length > 0) return fitting;
    const isBare = /^(events|channels|electrodes)\.tsv$/i.test(sidecarName);
    return isBare && open.length === 1 ? open : [];
  }

  /** The closest of several sidecars of a kind stays, unless a person puts another there. */
  putBeside(item: UploadItem, { kind, name, text }: LooseSidecar, byHand = false): void {
    const there = item.sidecars[kind];
    const closer = !there || (fit(name, item.name) ?? 0) >= (fit(there.name, item.name) ?? 0);
    if (byHand || closer) item.sidecars[kind] = { name, text };
  }

  private async offerCodes(file: File): Promise<void> {
    await this.orRefuse(file, async () => {
      const rows = parseParticipants(file.name, new Uint8Array(await file.arrayBuffer()));
      this.offeredCodes = rows.map((row) => row.code);
    });
  }

  private async orRefuse(file: File, use: () => Promise<void>): Promise<void> {
    try {
      await use();
    } catch (reason) {
      if (!(reason instanceof SidecarError)) throw reason;
      this.refused.push({ name: file.name, reason: `cannot be used. ${reason.message}` });
    }
  }

  /** Puts every ready file in line; a few at a time are sent. */
  sendAll(): void {
    for (const item of this.ready) if (item.participantProblem === null) item.status = 'waiting';
    this.next();
  }

  goOn(item: UploadItem): void {
    item.status = 'waiting';
    this.next();
  }

  /** What the connection interrupted. */
  goOnAll(): void {
    for (const item of this.items) if (item.waitsForConnection) item.status = 'waiting';
    this.next();
  }

  private next(): void {
    const underWay = this.items.filter(
      ({ status }) => status === 'sending' || status === 'storing',
    );
    const free = mostAtOnce - underWay.length;
    const waiting = this.items
      .filter((item) => item.status === 'waiting')
      .slice(0, Math.max(0, free));
    for (const item of waiting) {
      void item.send().then(() => {
        if (item.status === 'done') this.onStored();
        this.next();
      });
    }
  }

  async pause(item: UploadItem): Promise<void> {
    await item.pause();
    this.next();
  }

  async remove(item: UploadItem): Promise<void> {
    this.items = this.items.filter((other) => other !== item);
    await item.cancel();
    this.next();
  }

  clearDone(): void {
    this.items = this.items.filter((item) => item.status !== 'done');
  }
}

/** "P02 tapping.edf" begins with the known code P02; the longest that fits is meant. */
function codeAtStart(fileName: string, codes: string[]): string | null {
  const lower = fileName.toLowerCase();
  const fits = codes.filter((code) => {
    const next = lower[code.length] ?? '';
    return lower.startsWith(code.toLowerCase()) && !/[a-z0-9]/.test(next);
  });
  return fits.sort((a, b) => b.length - a.length)[0] ?? null;
}
