/** A photo, recipe or output that could not be used: names the file and says what to do about it. */
export class FileError extends Error {
  override readonly name = 'FileError';

  /**
   * @param path the file, as the user named it
   * @param problem what is wrong, in a few words
   * @param remedy what the user can do next
   */
  constructor(
    readonly path: string,
    readonly problem: string,
    readonly remedy: string,
    options?: ErrorOptions,
  ) {
    super(`${path}: ${problem}. ${remedy}`, options);
  }
}
