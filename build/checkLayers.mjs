// Keeps imports pointing one way: core knows nobody; renderer and main know core; they share only the
// types of the host API; electron is imported in the Electron shell alone.
import { readdir, readFile } from 'node:fs/promises';
import { dirname, join, relative, resolve, sep } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const hostApiTypes = join('main', 'host', 'api');
const nodeInCore = /^(node:|fs$|path$|worker_threads$|sharp$|electron$|react)/;

async function* sources(folder) {
  for (const entry of await readdir(folder, { withFileTypes: true })) {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) yield* sources(path);
    else if (/\.(ts|tsx|mts)$/.test(entry.name)) yield path;
  }
}

/** Why `layer` may not import `target` (a path from the root, or a package name), or null where it may. */
export function whyForbidden(fileFromRoot, specifier, targetFromRoot, isTypeOnly) {
  const layer = fileFromRoot.split(sep)[0];
  const targetLayer = targetFromRoot?.split(sep)[0];
  if (specifier === 'electron' && !/main[\\/]shells[\\/]electron/.test(fileFromRoot))
    return 'only the Electron shell imports electron';
  if (layer === 'core') {
    if (targetLayer && targetLayer !== 'core' && targetLayer !== 'presets')
      return 'core imports nothing from main or renderer';
    if (!targetLayer && nodeInCore.test(specifier))
      return 'core runs anywhere: no Node, DOM library or sharp';
  }
  if (
    layer === 'renderer' &&
    targetLayer === 'main' &&
    !(isTypeOnly && targetFromRoot.startsWith(hostApiTypes))
  )
    return `renderer takes only types from ${hostApiTypes}`;
  if (layer === 'main' && targetLayer === 'renderer') return 'main imports nothing from renderer';
  if (layer === 'main' && targetLayer === 'test') return 'main imports nothing from test';
  return null;
}

const importPattern =
  /(?:import|export)\s+(type\s+)?(?:[^'"`;]*?\sfrom\s+)?['"]([^'"]+)['"]|import\(\s*['"]([^'"]+)['"]\s*\)/g;

async function main() {
  const faults = [];
  for (const layer of ['core', 'main', 'renderer']) {
    for await (const file of sources(join(root, layer))) {
      const text = await readFile(file, 'utf8');
      for (const match of text.matchAll(importPattern)) {
        const specifier = match[2] ?? match[3];
        const target = specifier.startsWith('.') ? relative(root, resolve(dirname(file), specifier)) : null;
        const why = whyForbidden(relative(root, file), specifier, target, Boolean(match[1]));
        if (why) faults.push(`${relative(root, file)} imports ${specifier}: ${why}`);
      }
    }
  }
  for (const fault of faults) process.stderr.write(`${fault}\n`);
  if (faults.length > 0) process.exit(1);
  process.stdout.write('layers: imports point one way\n');
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await main();
