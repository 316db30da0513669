/** A parameter that cannot be used: says what was expected, for which key, and what was received. */
export class ParameterError extends Error {
  override readonly name = 'ParameterError';

  /**
   * @param key the parameter's key as written, known or not
   * @param expected what would have been right, in words
   * @param received the value as written
   */
  constructor(
    readonly key: string,
    readonly expected: string,
    readonly received: unknown,
  ) {
    super(
      `Expected ${expected} for ${key}, received ${typeof received === 'string' ? received : JSON.stringify(received)}`,
    );
  }
}
