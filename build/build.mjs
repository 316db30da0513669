// Builds what is named on the command line, or everything: kernels, host, renderer. Output: dist/.
import { buildHost } from './bundleHost.mjs';
import { buildRenderer } from './bundleRenderer.mjs';
import { compileKernels } from './compileKernels.mjs';

const steps = { kernels: compileKernels, host: buildHost, renderer: buildRenderer };
const asked = process.argv.slice(2);
const unknown = asked.filter((name) => !(name in steps));
if (unknown.length > 0) {
  process.stderr.write(
    `build: expected some of ${Object.keys(steps).join(', ')}, received ${unknown.join(', ')}\n`,
  );
  process.exit(2);
}
for (const [name, run] of Object.entries(steps)) {
  if (asked.length > 0 && !asked.includes(name)) continue;
  const startMs = performance.now();
  await run();
  process.stdout.write(`built ${name} in ${Math.round(performance.now() - startMs)} ms\n`);
}
