import { lstat } from 'node:fs/promises';

/** The path itself, or with the first number that nothing bears yet: `name`, `name.2`, `name.3` … */
export async function freePath(wanted: string): Promise<string> {
  for (let count = 1; ; count++) {
    const path = count === 1 ? wanted : `${wanted}.${count}`;
    const isTaken = await lstat(path).then(
      () => true,
      () => false,
    );
    if (!isTaken) return path;
  }
}
