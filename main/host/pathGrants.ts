import { dirname, isAbsolute, resolve, sep } from 'node:path';
import { Refusal } from './refusal.ts';

/**
 * What the user chose. The window never names a path of its own making: it may list a folder that was
 * shown to it, open a photo that lies in a listed folder or was chosen by dialog, drop, argument or an
 * earlier session, and write into a folder it may list or opened a photo from.
 */
export class PathGrants {
  readonly #listed = new Set<string>();
  readonly #offered = new Set<string>();
  readonly #openable = new Set<string>();
  readonly #profiles = new Set<string>();
  readonly #writable = new Set<string>();
  readonly #replaceable = new Set<string>();

  /** Offers a folder as a starting point of the picker. */
  offerFolder(folder: string): void {
    this.#offered.add(resolve(folder));
  }

  /** Notes that a folder's contents were shown. */
  folderWasListed(folder: string): void {
    this.#listed.add(resolve(folder));
  }

  /** The user chose this photo. */
  allowPhoto(path: string): void {
    this.#openable.add(resolve(path));
  }

  /** The user chose this colour profile, now or when the recipe was made that names it. */
  allowProfile(path: string): void {
    this.#profiles.add(resolve(path));
  }

  /** A painted file may be written into this folder. */
  allowWriting(folder: string): void {
    this.#writable.add(resolve(folder));
  }

  /** The user agreed in the system's dialog to replace this file, should it exist. */
  allowReplacing(path: string): void {
    this.#replaceable.add(resolve(path));
    this.allowWriting(dirname(resolve(path)));
  }

  /**
   * @returns the folder's absolute path
   * @throws Refusal where no answer has shown it
   */
  checkListing(folder: string): string {
    const path = absolute(folder);
    const shown =
      this.#offered.has(path) ||
      this.#listed.has(path) ||
      this.#listed.has(dirname(path)) ||
      this.#isAboveListed(path);
    return shown ? path : refuse(path);
  }

  /**
   * @returns the photo's absolute path
   * @throws Refusal where the user did not choose it
   */
  checkPhoto(photo: string): string {
    const path = absolute(photo);
    return this.#openable.has(path) || this.#listed.has(dirname(path)) ? path : refuse(path);
  }

  /**
   * @returns the profile's absolute path
   * @throws Refusal where the user did not choose it
   */
  checkProfile(profile: string): string {
    const path = absolute(profile);
    return this.#profiles.has(path) || this.#listed.has(dirname(path)) ? path : refuse(path);
  }

  /**
   * @returns the folder's absolute path
   * @throws Refusal where the user neither chose the folder nor opened a photo from it
   */
  checkWriting(folder: string): string {
    const path = absolute(folder);
    return this.#writable.has(path) || this.#listed.has(path) ? path : refuse(path);
  }

  mayReplace(path: string): boolean {
    return this.#replaceable.has(resolve(path));
  }

  #isAboveListed(path: string): boolean {
    const prefix = path.endsWith(sep) ? path : path + sep;
    for (const folder of this.#listed) if (folder.startsWith(prefix)) return true;
    return false;
  }
}

function absolute(path: string): string {
  if (path.includes('\0')) throw new Refusal('BadRequest', 'A path cannot hold a null character.');
  // A relative path would be taken from wherever the program was started, which nobody chose.
  const resolved = resolve(path);
  if (!isAbsolute(path)) refuse(resolved);
  return resolved;
}

function refuse(path: string): never {
  throw new Refusal(
    'NotAllowed',
    `${path} was not chosen in this window.`,
    'Choose it with Open, or start the program with it.',
  );
}
