import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { DelayedSaver } from '../../main/store/delayedSaver.ts';

describe('saving shortly after each change', () => {
  beforeEach(() => {
    vi.useFakeTimers();
  });
  afterEach(() => {
    vi.useRealTimers();
  });

  function newSaver() {
    const saved: number[] = [];
    const saver = new DelayedSaver<number>(async (value) => void saved.push(value), 400, 3000);
    return { saved, saver };
  }

  it('waits for a pause and saves the newest value once', async () => {
    const { saved, saver } = newSaver();
    for (const value of [1, 2, 3]) {
      saver.change(value);
      await vi.advanceTimersByTimeAsync(399);
    }
    expect(saved).toEqual([]);
    await vi.advanceTimersByTimeAsync(1);
    expect(saved).toEqual([3]);
    await vi.advanceTimersByTimeAsync(10_000);
    expect(saved).toEqual([3]);
  });

  it('does not wait for ever while changes keep coming', async () => {
    const { saved, saver } = newSaver();
    for (let value = 0; value < 70; value++) {
      saver.change(value);
      await vi.advanceTimersByTimeAsync(100);
    }
    expect(saved).toHaveLength(2);
  });

  it('saves at once when asked, after what is being saved, with no two at a time', async () => {
    const release: (() => void)[] = [];
    const begun: number[] = [];
    const saver = new DelayedSaver<number>((value) => {
      begun.push(value);
      return new Promise((resolve) => release.push(resolve));
    });
    saver.change(1);
    const first = saver.flush();
    saver.change(2);
    saver.change(3);
    const second = saver.flush();
    await vi.advanceTimersByTimeAsync(5000);
    expect(begun).toEqual([1]);
    release[0]();
    await vi.advanceTimersByTimeAsync(0);
    expect(begun).toEqual([1, 3]);
    release[1]();
    await Promise.all([first, second]);
    expect(begun).toEqual([1, 3]);
  });

  it('passes a failure on to who asked, and goes on', async () => {
    let isFull = true;
    const saved: number[] = [];
    const saver = new DelayedSaver<number>(async (value) => {
      if (isFull) throw new Error('the disk is full');
      saved.push(value);
    });
    saver.change(1);
    await expect(saver.flush()).rejects.toThrow('the disk is full');
    isFull = false;
    saver.change(2);
    await saver.flush();
    expect(saved).toEqual([2]);
  });
});
