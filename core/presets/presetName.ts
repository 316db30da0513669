/** Names that files, recipes and the command line use: lower case, digits, single hyphens. */
export const presetNamePattern = /^[a-z0-9]+(?:-[a-z0-9]+)*$/;

const longestName = 60;

/**
 * Makes a preset's name from its title.
 * @param title any text; letters of other scripts and signs are dropped, accents are lifted
 * @returns a name that fits `presetNamePattern`; `preset` where nothing usable is left
 */
export function nameFromTitle(title: string): string {
  const plain = title
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .slice(0, longestName)
    .replace(/^-+|-+$/g, '');
  return plain === '' ? 'preset' : plain;
}

/**
 * A name nobody has yet.
 * @param wanted the name one would like
 * @param taken names in use
 * @returns `wanted`, or `wanted-2`, `wanted-3` …
 */
export function freeName(wanted: string, taken: ReadonlySet<string>): string {
  if (!taken.has(wanted)) return wanted;
  for (let count = 2; ; count++) {
    const candidate = `${wanted}-${count}`;
    if (!taken.has(candidate)) return candidate;
  }
}
