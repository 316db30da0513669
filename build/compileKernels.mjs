// Compiles core/kernels/assembly into one WebAssembly SIMD module, dist/kernels.wasm.
import { mkdir } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import asc from 'assemblyscript/dist/asc.js';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');

/** Pages of shared memory that the module starts with; hosts grow it as pictures need. */
const initialPages = 64;
/** 4 GiB, the most a 32-bit module can address. */
const maximumPages = 65536;

export async function compileKernels() {
  await mkdir(join(root, 'dist'), { recursive: true });
  const { error, stderr } = await asc.main([
    'core/kernels/assembly/index.ts',
    '--baseDir',
    root,
    '--outFile',
    'dist/kernels.wasm',
    '-O3',
    '--noAssert',
    '--converge',
    '--runtime',
    'stub',
    '--importMemory',
    '--sharedMemory',
    '--initialMemory',
    String(initialPages),
    '--maximumMemory',
    String(maximumPages),
    '--enable',
    'simd,threads',
  ]);
  if (error) throw new Error(`The kernels do not compile: ${error.message}\n${stderr.toString()}`);
}
