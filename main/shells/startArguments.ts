import { resolve } from 'node:path';

/** What a shell was started with. */
export interface StartArguments {
  /** Absolute path of the photo or folder to open, if one was named. */
  path: string | null;
  /** Serve, but open no window. */
  noWindow: boolean;
}

/**
 * Reads a shell's arguments: at most one photo or folder; switches other than ours belong to the shell's own
 * platform and are passed over.
 * @param given what follows the program's name
 * @param folder what relative paths start from
 */
export function readStartArguments(
  given: readonly string[],
  folder: string = process.cwd(),
  environment: NodeJS.ProcessEnv = process.env,
): StartArguments {
  const named = given.find((argument) => !argument.startsWith('-'));
  return {
    path: named ? resolve(folder, named) : null,
    noWindow: given.includes('--no-window') || Boolean(environment.OXGALL_NO_WINDOW),
  };
}
