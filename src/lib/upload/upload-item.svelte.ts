import type { SidecarKind } from '$lib/model/bids-names';
import { participantCodePattern, participantCodeRule } from '$lib/model/participant';
import { finishUpload, type Finished } from './finish';
import { blankedFile, FileProblem, inspectRecording, type Inspected } from './inspect';
import { TransferRate } from './rate';
import {
  fingerprintOf,
  startTransfer,
  type RunningTransfer,
  type TransferProblem,
} from './transfer';

export type UploadStatus =
  | 'reading'
  | 'unreadable'
  | 'ready'
  | 'waiting'
  | 'sending'
  | 'paused'
  | 'storing'
  | 'failed'
  | 'done';

/** One file on its way: what was read of it, what the person decided, how far it is. */
export class UploadItem {
  status = $state<UploadStatus>('reading');
  inspected = $state.raw<Inspected | null>(null);
  participant = $state('');
  keepIdentification = $state(false);
  sidecars = $state<Partial<Record<SidecarKind, { name: string; text: string }>>>({});
  bytesSent = $state(0);
  bytesPerSecond = $state<number | null>(null);
  secondsLeft = $state<number | null>(null);
  problem = $state<string | null>(null);
  /** The connection is to blame: goes on by itself when it is back. */
  waitsForConnection = $state(false);
  result = $state.raw<Finished | null>(null);
  readonly size: number;
  readonly name: string;

  private transfer: RunningTransfer | null = null;
  private uploadId: string | null = null;
  private readonly rate = new TransferRate();

  constructor(
    readonly file: File,
    private readonly studyId: string,
    private readonly limitBytes: number,
  ) {
    this.size = file.size;
    this.name = file.name;
  }

  get participantProblem(): string | null {
    if (this.participant === '') return 'Give the participant’s code.';
    return participantCodePattern.test(this.participant) ? null : participantCodeRule;
  }

  /** Its choices can still be changed. */
  get isOpen(): boolean {
    const isUnsentOrWhole = this.bytesSent === 0 || this.bytesSent === this.size;
    return this.status === 'ready' || (this.status === 'failed' && isUnsentOrWhole);
  }

  get isBusy(): boolean {
    return this.status === 'waiting' || this.status === 'sending' || this.status === 'storing';
  }

  leaveOut(kind: SidecarKind): void {
    const others = Object.entries(this.sidecars).filter(([other]) => other !== kind);
    this.sidecars = Object.fromEntries(others);
  }

  async inspect(): Promise<void> {
    try {
      this.inspected = await inspectRecording(this.file, this.limitBytes);
      this.status = 'ready';
    } catch (reason) {
      if (!(reason instanceof FileProblem)) throw reason;
      this.problem = reason.message;
      this.status = 'unreadable';
    }
  }

  /** Sends, or goes on sending, and has the recording stored. */
  async send(): Promise<void> {
    this.problem = null;
    this.waitsForConnection = false;
    this.status = 'sending';
    this.rate.reset();
    try {
      this.uploadId ??= await this.sendBytes();
      this.status = 'storing';
      this.result = await finishUpload(this.uploadId, {
        participant: this.participant,
        keepIdentification: this.keepIdentification,
        sidecars: $state.snapshot(this.sidecars),
      });
      await this.transfer?.forget();
      this.status = 'done';
    } catch (reason) {
      const { kind, message } = reason as TransferProblem;
      this.problem = message ?? String(reason);
      this.waitsForConnection = kind === 'connection';
      if (kind === 'gone') await this.startOver();
      this.status = 'failed';
    }
  }

  private async startOver(): Promise<void> {
    this.uploadId = null;
    this.bytesSent = 0;
    await this.transfer?.forget();
  }

  private async sendBytes(): Promise<string> {
    const bytes = this.keepIdentification ? this.file : await blankedFile(this.file);
    this.transfer = startTransfer({
      studyId: this.studyId,
      filename: this.name,
      bytes,
      fingerprint: fingerprintOf(this.studyId, this.file, this.keepIdentification),
      onProgress: (sent) => this.progressed(sent),
    });
    return this.transfer.done;
  }

  private progressed(sent: number): void {
    this.bytesSent = sent;
    this.rate.add(sent, performance.now());
    this.bytesPerSecond = this.rate.bytesPerSecond;
    this.secondsLeft = this.rate.secondsLeft(this.size);
  }

  async pause(): Promise<void> {
    this.status = 'paused';
    this.bytesPerSecond = null;
    await this.transfer?.pause();
  }

  async cancel(): Promise<void> {
    await this.transfer?.cancel();
  }
}
