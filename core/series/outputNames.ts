/**
 * Names of the paintings of a folder: each photo's base name; its whole name where several photos share the base; and
 * a number where even that is taken.
 * @param photoNames file names, in order; not modified
 * @param extension with its dot
 * @returns by photo name; no two alike, not even on disks that do not tell capitals from small letters
 */
export function outputNames(photoNames: readonly string[], extension: string): Map<string, string> {
  const names = new Map<string, string>();
  const used = new Set<string>();
  const shared = sharedBases(photoNames);
  for (const name of photoNames) {
    if (shared.has(foldName(baseOf(name)))) continue;
    const output = `${baseOf(name)}${extension}`;
    names.set(name, output);
    used.add(foldName(output));
  }
  for (const name of photoNames) {
    if (names.has(name)) continue;
    let output = `${name}${extension}`;
    for (let number = 2; used.has(foldName(output)); number++) output = `${name} ${number}${extension}`;
    names.set(name, output);
    used.add(foldName(output));
  }
  return names;
}

/** Bases that more than one photo has, folded. */
function sharedBases(photoNames: readonly string[]): Set<string> {
  const [seen, shared] = [new Set<string>(), new Set<string>()];
  for (const name of photoNames) {
    const base = foldName(baseOf(name));
    (seen.has(base) ? shared : seen).add(base);
  }
  return shared;
}

/** A file name as the least particular disk would tell it from others. */
export function foldName(name: string): string {
  return name.normalize('NFC').toLowerCase();
}

/** A file name without its extension. */
export function baseOf(name: string): string {
  const dot = name.lastIndexOf('.');
  return dot > 0 ? name.slice(0, dot) : name;
}
