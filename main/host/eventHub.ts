import type { HostEventName, HostEvents } from './api/hostEvents.ts';
import { Refusal } from './refusal.ts';

const pingEveryMs = 15_000;
const maximumListeners = 8;
/** A listener that lets this much pile up has gone away without saying so. */
const maximumPendingChunks = 1000;

/** Sends events to every window that listens. */
export class EventHub {
  readonly #listeners = new Set<ReadableStreamDefaultController<Uint8Array>>();
  readonly #encoder = new TextEncoder();
  #ping: NodeJS.Timeout | undefined;

  get listenerCount(): number {
    return this.#listeners.size;
  }

  /** Tells every listener; nobody listening is no error. */
  send<Name extends HostEventName>(name: Name, data: HostEvents[Name]): void {
    this.#write(`event: ${name}\ndata: ${JSON.stringify(data)}\n\n`);
  }

  /**
   * A response that stays open and carries the events from now on.
   * @throws Refusal where too many listen already
   */
  listen(signal: AbortSignal): Response {
    if (this.#listeners.size >= maximumListeners)
      throw new Refusal('TooLarge', 'Too many windows listen already.', 'Close one of them.');
    let mine: ReadableStreamDefaultController<Uint8Array>;
    const leave = () => this.#drop(mine);
    const body = new ReadableStream<Uint8Array>(
      {
        start: (controller) => {
          mine = controller;
          this.#listeners.add(controller);
          controller.enqueue(this.#encoder.encode(': listening\n\n'));
        },
        cancel: leave,
      },
      { highWaterMark: maximumPendingChunks },
    );
    signal.addEventListener('abort', leave, { once: true });
    this.#ping ??= setInterval(() => this.#write(': still here\n\n'), pingEveryMs).unref();
    return new Response(body, {
      headers: { 'content-type': 'text/event-stream', 'cache-control': 'no-store' },
    });
  }

  close(): void {
    for (const listener of this.#listeners) this.#drop(listener);
  }

  #write(text: string): void {
    const chunk = this.#encoder.encode(text);
    for (const listener of this.#listeners) {
      if ((listener.desiredSize ?? 0) <= 0) this.#drop(listener);
      else listener.enqueue(chunk);
    }
  }

  #drop(listener: ReadableStreamDefaultController<Uint8Array>): void {
    if (!this.#listeners.delete(listener)) return;
    try {
      listener.close();
    } catch {
      // The window went away first; its stream is closed already.
    }
    if (this.#listeners.size === 0) {
      clearInterval(this.#ping);
      this.#ping = undefined;
    }
  }
}
