import { readEvents } from '../../core/hostProtocol/eventStream.ts';
import type { HostEvent } from '../../main/host/api/hostEvents.ts';

const firstWaitMs = 250;
const longestWaitMs = 5000;

/** Follows the host's events for as long as the window lives; a broken stream is taken up again. */
export async function listenToHost(take: (event: HostEvent) => void, signal: AbortSignal): Promise<void> {
  let waitMs = firstWaitMs;
  while (!signal.aborted) {
    try {
      const response = await fetch('/api/events', { signal });
      if (response.ok && response.body) {
        waitMs = firstWaitMs;
        for await (const event of readEvents(response.body)) take(event as HostEvent);
      }
    } catch {
      // The host went away or the stream broke: both end in another try.
    }
    await new Promise((resolve) => setTimeout(resolve, waitMs));
    waitMs = Math.min(longestWaitMs, waitMs * 2);
  }
}
