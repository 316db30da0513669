/**
 * Shares one composition among threads. Each helper sleeps on a word of its own until a job is written for it;
 * the caller composes a part as well and then waits for the rest. Pixels do not depend on their neighbours here,
 * so that any division gives the same bits.
 */

/** Words of a helper's mailbox: its state, then the arguments of the kernel. */
export const mailboxWords = 16;
export const argumentCount = 12;

/** States of a mailbox; a helper writes `idle`, the caller `asked`. */
export const helperState = { starting: 0, idle: 1, asked: 2 } as const;

/** The arguments of the compose kernel, in its order. */
export type ComposeArguments = readonly number[];

export interface HelperStart {
  module: WebAssembly.Module;
  memory: WebAssembly.Memory;
  mailbox: Int32Array;
}

/** Positions in `ComposeArguments` that move with the first pixel of a part. */
const at = {
  ground: 0,
  groundBytes: 1,
  groundChannels: 2,
  body: 3,
  line: 4,
  relief: 5,
  count: 6,
  out: 9,
  outBytes: 10,
  outChannels: 11,
};

/** The same composition for `count` pixels from `first` on. */
export function partOf(whole: ComposeArguments, first: number, count: number): number[] {
  const part = [...whole];
  part[at.ground] += first * whole[at.groundBytes] * whole[at.groundChannels];
  // 0 stands for a stratum that is left out.
  if (whole[at.body] !== 0) part[at.body] += first * 6;
  if (whole[at.line] !== 0) part[at.line] += first;
  if (whole[at.relief] !== 0) part[at.relief] += first;
  part[at.out] += first * whole[at.outBytes] * whole[at.outChannels];
  part[at.count] = count;
  return part;
}

/** Below this many pixels, waking somebody takes longer than composing. */
const worthSharing = 100_000;

export class ComposeHands {
  private readonly mailboxes: Int32Array[] = [];

  constructor(
    private readonly composeHere: (part: ComposeArguments) => void,
    start: Omit<HelperStart, 'mailbox'>,
    helperCount: number,
  ) {
    for (let index = 0; index < helperCount; index++) {
      const mailbox = new Int32Array(new SharedArrayBuffer(mailboxWords * 4));
      const helper = new Worker(new URL('./composeHelper.worker.ts', import.meta.url), { type: 'module' });
      helper.postMessage({ ...start, mailbox } satisfies HelperStart);
      this.mailboxes.push(mailbox);
    }
  }

  compose(whole: ComposeArguments): void {
    const count = whole[at.count];
    const ready = this.mailboxes.filter((mailbox) => Atomics.load(mailbox, 0) === helperState.idle);
    if (count < worthSharing || ready.length === 0) {
      this.composeHere(whole);
      return;
    }
    const share = Math.ceil(count / (ready.length + 1) / 16) * 16;
    for (const [index, mailbox] of ready.entries()) {
      const first = share * (index + 1);
      mailbox.set(partOf(whole, first, Math.max(0, Math.min(share, count - first))), 1);
      Atomics.store(mailbox, 0, helperState.asked);
      Atomics.notify(mailbox, 0);
    }
    this.composeHere(partOf(whole, 0, Math.min(share, count)));
    for (const mailbox of ready)
      while (Atomics.load(mailbox, 0) === helperState.asked) Atomics.wait(mailbox, 0, helperState.asked, 50);
  }
}
