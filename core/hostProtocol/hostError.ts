/** Why a call failed; the interface decides by these, people read message and remedy. */
export type HostErrorKind =
  /** The request is not one the host understands. */
  | 'BadRequest'
  /** The body is larger than the command may be. */
  | 'TooLarge'
  /** No token, a foreign Host or Origin, or a path nobody chose. */
  | 'NotAllowed'
  /** No such command, call or photo; a photo may have been closed to make room. */
  | 'NotFound'
  /** A newer call for the same view took this one's place. */
  | 'Superseded'
  /** The call was cancelled. */
  | 'Cancelled'
  /** A parameter out of range. */
  | 'ParameterError'
  /** A photo or output that cannot be used. */
  | 'FileError'
  /** A fault of ours. */
  | 'HostFault';

/** An error as it travels. */
export interface HostErrorBody {
  name: HostErrorKind;
  /** What went wrong, one plain sentence. */
  message: string;
  /** What to do about it; empty where there is nothing to do. */
  remedy: string;
  callId: string;
}

/** A call to the host that failed. */
export class HostError extends Error {
  readonly kind: HostErrorKind;
  readonly remedy: string;
  readonly callId: string;

  constructor(body: HostErrorBody, options?: ErrorOptions) {
    super(body.message, options);
    this.name = body.name;
    this.kind = body.name;
    this.remedy = body.remedy;
    this.callId = body.callId;
  }
}
