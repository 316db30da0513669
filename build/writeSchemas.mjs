// Writes the JSON Schemas of recipes and presets into presets/schemas, from their one definition in core.
import { mkdir, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { runnerImport } from 'vite';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');

const { module } = await runnerImport(join(root, 'core/recipes/jsonSchemas.ts'), { configFile: false });
const folder = join(root, 'presets/schemas');
await mkdir(folder, { recursive: true });
for (const [name, schema] of Object.entries(module.jsonSchemas()))
  await writeFile(join(folder, name), `${JSON.stringify(schema, null, 2)}\n`);
