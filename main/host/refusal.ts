import type { HostErrorBody, HostErrorKind } from '../../core/hostProtocol/hostError.ts';
import { ParameterError } from '../../core/parameters/parameterError.ts';
import { FileError } from '../files/fileError.ts';

const statusOf: Record<HostErrorKind, 400 | 403 | 404 | 409 | 413 | 422 | 499 | 500> = {
  BadRequest: 400,
  NotAllowed: 403,
  NotFound: 404,
  Superseded: 409,
  TooLarge: 413,
  ParameterError: 422,
  FileError: 422,
  // No standard status says "the client gave up"; 499 is what proxies commonly log for it.
  Cancelled: 499,
  HostFault: 500,
};

/** A call the host turns down, in words for the person at the window. */
export class Refusal extends Error {
  override readonly name = 'Refusal';

  constructor(
    readonly kind: HostErrorKind,
    message: string,
    readonly remedy = '',
    options?: ErrorOptions,
  ) {
    super(message, options);
  }
}

/** The reason given to a signal whose call was cancelled. */
export const cancelled = () => new Refusal('Cancelled', 'The work was stopped.');

/**
 * Any error as it travels.
 * @param error what was thrown
 * @param callId whose call it was
 * @param signal the call's own; once aborted, its reason explains whatever was thrown after
 */
export function describeError(
  error: unknown,
  callId: string,
  signal?: AbortSignal,
): { status: number; body: { error: HostErrorBody } } {
  const cause = signal?.aborted ? asRefusal(signal.reason) : asRefusal(error);
  const { kind, message, remedy } = cause;
  return { status: statusOf[kind], body: { error: { name: kind, message, remedy, callId } } };
}

function asRefusal(error: unknown): Refusal {
  if (error instanceof Refusal) return error;
  if (error instanceof FileError)
    return new Refusal('FileError', `${error.path}: ${error.problem}.`, error.remedy);
  if (error instanceof ParameterError)
    return new Refusal('ParameterError', error.message, 'Type a value inside the range, or reset it.');
  if (error instanceof Error && error.name === 'AbortError') return cancelled();
  const detail = error instanceof Error ? error.message : String(error);
  return new Refusal('HostFault', `Something went wrong: ${detail}`, 'Try again; unsaved changes are kept.');
}
