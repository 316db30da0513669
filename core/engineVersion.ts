/** Raised whenever any output pixel changes for the same photo and parameters. */
export const engineVersion = '1';
