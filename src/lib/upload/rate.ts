/** Bytes a second over the last few seconds, and what that means for the rest. */
export class TransferRate {
  private marks: { atMs: number; bytes: number }[] = [];

  constructor(private readonly windowMs = 8000) {}

  add(bytes: number, atMs: number): void {
    this.marks.push({ atMs, bytes });
    while (this.marks.length > 2 && this.marks[1]!.atMs < atMs - this.windowMs) this.marks.shift();
  }

  reset(): void {
    this.marks = [];
  }

  /** Null until two marks say something. */
  get bytesPerSecond(): number | null {
    const first = this.marks[0];
    const last = this.marks.at(-1);
    if (!first || !last || last.atMs <= first.atMs || last.bytes <= first.bytes) return null;
    return ((last.bytes - first.bytes) / (last.atMs - first.atMs)) * 1000;
  }

  secondsLeft(totalBytes: number): number | null {
    const rate = this.bytesPerSecond;
    const last = this.marks.at(-1);
    return rate === null || !last ? null : (totalBytes - last.bytes) / rate;
  }
}
