import { describe, expect, it } from 'vitest';
import { TransferRate } from '$lib/upload/rate';

describe('the rate of a transfer', () => {
  it('says nothing before two marks', () => {
    const rate = new TransferRate();
    rate.add(100, 0);
    expect(rate.bytesPerSecond).toBeNull();
    expect(rate.secondsLeft(1000)).toBeNull();
  });

  it('is bytes over time, and the rest over the rate', () => {
    const rate = new TransferRate();
    rate.add(0, 0);
    rate.add(1000, 500);
    expect(rate.bytesPerSecond).toBe(2000);
    expect(rate.secondsLeft(5000)).toBe(2);
  });

  it('forgets what is older than its window', () => {
    const rate = new TransferRate(1000);
    rate.add(0, 0);
    rate.add(10_000, 1000);
    rate.add(10_100, 2000);
    rate.add(10_200, 3000);
    expect(rate.bytesPerSecond).toBe(100);
  });

  it('begins anew after a pause', () => {
    const rate = new TransferRate();
    rate.add(0, 0);
    rate.add(1000, 1000);
    rate.reset();
    rate.add(1000, 60_000);
    expect(rate.bytesPerSecond).toBeNull();
  });
});
