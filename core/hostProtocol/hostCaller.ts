import { decodeFrame, type Frame } from './frame.ts';
import { HostError, type HostErrorBody } from './hostError.ts';
import { type MakeRoom, readBody } from './readBody.ts';

/** Every call carries its own id in this header; no two calls under way may share one. */
export const callIdHeader = 'x-oxgall-call';

/** Command name → what goes in and what comes out; a frame's header where pixels come out. */
export type CommandMap<Commands> = {
  [Name in keyof Commands]: { input: unknown; output: unknown } | { input: unknown; frame: unknown };
};

export type JsonCommand<Commands> = {
  [Name in keyof Commands]: Commands[Name] extends { output: unknown } ? Name : never;
}[keyof Commands] &
  string;

export type FrameCommand<Commands> = {
  [Name in keyof Commands]: Commands[Name] extends { frame: unknown } ? Name : never;
}[keyof Commands] &
  string;

type Input<Command> = Command extends { input: infer I } ? I : never;
type Output<Command> = Command extends { output: infer O } ? O : never;
type FrameOf<Command> = Command extends { frame: infer H } ? H : never;

export interface CallOptions {
  /** Aborting it cancels the work in the host. */
  signal?: AbortSignal;
  /** Chosen beforehand where progress is to be followed; else made here. */
  callId?: string;
}

export interface HostCaller<Commands extends CommandMap<Commands>> {
  /** Runs a command that answers in JSON. */
  call<Name extends JsonCommand<Commands>>(
    name: Name,
    input: Input<Commands[Name]>,
    options?: CallOptions,
  ): Promise<Output<Commands[Name]>>;
  /** Runs a command that answers in pixels, read into `makeRoom`'s memory. */
  callForFrame<Name extends FrameCommand<Commands>>(
    name: Name,
    input: Input<Commands[Name]>,
    options?: CallOptions & { makeRoom?: MakeRoom },
  ): Promise<Frame<FrameOf<Commands[Name]>>>;
}

/** A fresh call id. */
export function newCallId(): string {
  return globalThis.crypto.randomUUID();
}

/**
 * The typed client of the host, for any shell.
 * @param options.fetch how requests travel; the platform's unless given
 * @param options.base where the host answers, such as `https://…/`; the page's own origin unless given
 */
export function createHostCaller<Commands extends CommandMap<Commands>>(
  options: { fetch?: (request: Request) => Promise<Response>; base?: string } = {},
): HostCaller<Commands> {
  const send = options.fetch ?? ((request: Request) => globalThis.fetch(request));
  const base = options.base ?? globalThis.location.origin;

  async function post(name: string, input: unknown, { signal, callId = newCallId() }: CallOptions) {
    const request = new Request(new URL(`/api/${name}`, base), {
      method: 'POST',
      headers: { 'content-type': 'application/json', [callIdHeader]: callId },
      body: JSON.stringify(input),
      signal,
    });
    // Not every shell tells the host that a request was aborted, so the host is told in words as well.
    // The answer is read to its end: one that is left unread may keep its connection.
    const cancel = () =>
      void post('cancelCall', { callId }, {})
        .then((response) => response.arrayBuffer())
        .catch(() => undefined);
    signal?.addEventListener('abort', cancel, { once: true });
    try {
      const response = await send(request);
      if (!response.ok) throw await errorOf(response, callId);
      return response;
    } finally {
      signal?.removeEventListener('abort', cancel);
    }
  }

  return {
    async call(name, input, callOptions = {}) {
      const response = await post(name, input, callOptions);
      return (await response.json()) as Output<Commands[typeof name]>;
    },
    async callForFrame(name, input, callOptions = {}) {
      const response = await post(name, input, callOptions);
      const { buffer, lengthBytes } = await readBody(response, callOptions.makeRoom);
      return decodeFrame<FrameOf<Commands[typeof name]>>(buffer, lengthBytes);
    },
  };
}

async function errorOf(response: Response, callId: string): Promise<HostError> {
  try {
    const { error } = (await response.json()) as { error: HostErrorBody };
    return new HostError(error);
  } catch (cause) {
    const body: HostErrorBody = {
      name: 'HostFault',
      message: `The host answered ${response.status} without saying why.`,
      remedy: 'Start the program again; unsaved work is kept.',
      callId,
    };
    return new HostError(body, { cause });
  }
}
