/** Composes the part of the picture that its mailbox names, over and over; see composeHands.ts. */
import { instantiateKernels } from '../../core/kernels/module.ts';
import { argumentCount, type HelperStart, helperState } from './composeHands.ts';

type ComposeKernel = (...part: number[]) => void;

self.onmessage = async ({ data }: MessageEvent<HelperStart>) => {
  const { mailbox } = data;
  const kernels = await instantiateKernels(data.module, data.memory);
  const compose = kernels.compose as ComposeKernel;
  Atomics.store(mailbox, 0, helperState.idle);
  for (;;) {
    Atomics.wait(mailbox, 0, helperState.idle);
    if (Atomics.load(mailbox, 0) !== helperState.asked) continue;
    compose(...mailbox.subarray(1, 1 + argumentCount));
    Atomics.store(mailbox, 0, helperState.idle);
    Atomics.notify(mailbox, 0);
  }
};
