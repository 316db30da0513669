import { constants } from 'node:fs';
import { access, readdir, stat } from 'node:fs/promises';
import { homedir } from 'node:os';
import { basename, dirname, extname, join } from 'node:path';
import { fileErrorFrom } from '../files/systemErrors.ts';
import type { FolderListing } from './api/hostCommands.ts';

const photoExtensions = new Set('.jpg .jpeg .jpe .jfif .png .tif .tiff .webp .avif .gif'.split(' '));
const maximumEntries = 2000;
const naturalOrder = new Intl.Collator('en', { numeric: true, sensitivity: 'base' });

/** Whether a file name is one of a photo; what the file holds is seen when it is opened. */
export function isPhotoName(name: string): boolean {
  return photoExtensions.has(extname(name).toLowerCase());
}

/** Whether a file name is one of a colour profile. */
export function isProfileName(name: string): boolean {
  return /\.ic[cm]$/i.test(name);
}

/**
 * The folders, photos and colour profiles in a folder, in natural order; hidden ones and other files are left out.
 * @param folder absolute
 * @throws FileError where it cannot be read
 */
export async function listFolder(folder: string): Promise<Omit<FolderListing, 'places'>> {
  let names: string[];
  try {
    names = await readdir(folder);
  } catch (cause) {
    throw fileErrorFrom(folder, cause);
  }
  const shown = names.filter((name) => !name.startsWith('.')).sort(naturalOrder.compare);
  const found = await Promise.all(shown.slice(0, maximumEntries).map((name) => look(folder, name)));
  return {
    path: folder,
    name: basename(folder) || folder,
    crumbs: crumbsOf(folder),
    folders: found.flatMap((entry) => (entry?.kind === 'folder' ? [entry.folder] : [])),
    photos: found.flatMap((entry) => (entry?.kind === 'photo' ? [entry.photo] : [])),
    profiles: found.flatMap((entry) => (entry?.kind === 'profile' ? [entry.profile] : [])),
    truncated: shown.length > maximumEntries,
    writable: await access(folder, constants.W_OK).then(
      () => true,
      () => false,
    ),
  };
}

/** Where the system and its programs keep colour profiles. */
export async function listProfilePlaces(home: string = homedir()): Promise<{ name: string; path: string }[]> {
  const known: Partial<Record<NodeJS.Platform, [name: string, path: string][]>> = {
    linux: [
      ['Profiles', '/usr/share/color/icc'],
      ['My profiles', join(home, '.local/share/icc')],
    ],
    darwin: [
      ['Profiles', '/Library/ColorSync/Profiles'],
      ['System profiles', '/System/Library/ColorSync/Profiles'],
      ['My profiles', join(home, 'Library/ColorSync/Profiles')],
    ],
    win32: [['Profiles', 'C:\\Windows\\System32\\spool\\drivers\\color']],
  };
  const places: { name: string; path: string }[] = [];
  for (const [name, path] of known[process.platform] ?? [])
    if (await isFolder(path)) places.push({ name, path });
  return places;
}

/** Where people keep photos: home, its pictures, removable and network volumes. */
export async function listPlaces(home: string = homedir()): Promise<{ name: string; path: string }[]> {
  const places = [{ name: 'Home', path: home }];
  for (const name of ['Pictures', 'Desktop', 'Documents', 'Downloads'])
    if (await isFolder(join(home, name))) places.push({ name, path: join(home, name) });
  const mounts = { linux: ['/media', '/mnt', '/run/media'], darwin: ['/Volumes'] }[
    process.platform as 'linux'
  ];
  for (const mount of mounts ?? []) if (await isFolder(mount)) places.push({ name: mount, path: mount });
  if (process.platform === 'win32')
    for (const letter of 'CDEFGHIJ')
      if (await isFolder(`${letter}:\\`)) places.push({ name: `${letter}:`, path: `${letter}:\\` });
  return places;
}

type Entry =
  | { kind: 'folder'; folder: FolderListing['folders'][number] }
  | { kind: 'photo'; photo: FolderListing['photos'][number] }
  | { kind: 'profile'; profile: FolderListing['profiles'][number] };

async function look(folder: string, name: string): Promise<Entry | null> {
  const path = join(folder, name);
  // A link that leads nowhere, or a file that went meanwhile, is simply not shown.
  const facts = await stat(path).catch(() => null);
  if (facts?.isDirectory()) return { kind: 'folder', folder: { name, path } };
  if (facts?.isFile() && isProfileName(name)) return { kind: 'profile', profile: { name, path } };
  if (!facts?.isFile() || !isPhotoName(name)) return null;
  return {
    kind: 'photo',
    photo: { name, path, sizeBytes: facts.size, modifiedAt: facts.mtime.toISOString() },
  };
}

function crumbsOf(folder: string): { name: string; path: string }[] {
  const crumbs: { name: string; path: string }[] = [];
  for (let path = folder; ; path = dirname(path)) {
    crumbs.unshift({ name: basename(path) || path, path });
    if (dirname(path) === path) return crumbs;
  }
}

async function isFolder(path: string): Promise<boolean> {
  const facts = await stat(path).catch(() => null);
  return facts?.isDirectory() ?? false;
}
