// npm start [-- photo-or-folder]: builds what is missing or older than its sources, then opens the program in
// Electron where its binary is there or can be fetched, else in an installed browser.
import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
/** Fetching Electron's binary is tried once, and no longer than this. */
const fetchTimeoutMs = 20_000;
const electronFolder = join(root, 'node_modules', 'electron');
const triedNote = join(root, 'node_modules', '.cache', 'oxgall', 'electron-not-fetched.json');

/** What each part of dist is made from. */
const outputs = [
  {
    step: 'kernels',
    output: 'dist/kernels.wasm',
    sources: ['core/kernels/assembly', 'build/compileKernels.mjs'],
  },
  {
    step: 'host',
    output: 'dist/main/loopbackShell.js',
    sources: ['core', 'main', 'presets', 'build/bundleHost.mjs'],
  },
  {
    step: 'renderer',
    output: 'dist/renderer/index.html',
    sources: ['core', 'renderer', 'build/bundleRenderer.mjs'],
  },
];

/** The latest change in a file or folder, milliseconds since 1970; 0 where there is none. */
export function latestChangeMs(path) {
  if (!existsSync(path)) return 0;
  const facts = statSync(path);
  if (!facts.isDirectory()) return facts.mtimeMs;
  const inside = readdirSync(path).map((name) => latestChangeMs(join(path, name)));
  return Math.max(0, ...inside);
}

/** The build steps whose output is missing or older than its sources. */
export function staleSteps(folder = root) {
  return outputs
    .filter(({ output, sources }) => {
      const builtMs = latestChangeMs(join(folder, output));
      return sources.some((source) => latestChangeMs(join(folder, source)) > builtMs);
    })
    .map(({ step }) => step);
}

/** Electron's program where it is on this disk, else null. Never imports the package: that would fetch it. */
export function findElectron(folder = electronFolder, environment = process.env) {
  const pathFile = join(folder, 'path.txt');
  const names = { darwin: 'Electron.app/Contents/MacOS/Electron', win32: 'electron.exe' };
  const usualName = names[process.platform] ?? 'electron';
  const name = existsSync(pathFile) ? readFileSync(pathFile, 'utf8').trim() : usualName;
  const override = environment.ELECTRON_OVERRIDE_DIST_PATH;
  const candidates = [override && join(override, name), existsSync(pathFile) && join(folder, 'dist', name)];
  return candidates.find((path) => path && existsSync(path)) || null;
}

/** Lets the package fetch its binary, within a time limit; a failure is remembered so that it costs time once. */
async function fetchElectron(again) {
  const installer = join(electronFolder, 'install.js');
  if (!existsSync(installer)) return 'Electron is not installed';
  const { version } = JSON.parse(readFileSync(join(electronFolder, 'package.json'), 'utf8'));
  if (!again && existsSync(triedNote) && JSON.parse(readFileSync(triedNote, 'utf8')).version === version)
    return 'Electron could not be fetched earlier (OXGALL_SHELL=electron tries again)';
  const fetched = await finishes(spawn(process.execPath, [installer], { stdio: 'ignore' }), fetchTimeoutMs);
  if (fetched && findElectron()) return null;
  mkdirSync(dirname(triedNote), { recursive: true });
  writeFileSync(triedNote, JSON.stringify({ version, triedAt: new Date().toISOString() }));
  return 'Electron could not be fetched';
}

/** Whether a child ends well within the time limit; one that does not is ended. */
function finishes(child, timeoutMs) {
  return new Promise((done) => {
    const timer = setTimeout(() => child.kill('SIGKILL'), timeoutMs);
    const end = (ok) => {
      clearTimeout(timer);
      done(ok);
    };
    child.once('error', () => end(false));
    child.once('exit', (code) => end(code === 0));
  });
}

async function buildStale() {
  const steps = staleSteps();
  if (steps.length === 0) return;
  const child = spawn(process.execPath, [join(root, 'build/build.mjs'), ...steps], {
    stdio: ['ignore', 'ignore', 'inherit'],
  });
  if (!(await finishes(child, 10 * 60_000))) throw new Error('The program could not be built; see above.');
}

/** Which shell shows the window, and why, in one line. */
async function chooseShell(environment) {
  const wanted = environment.OXGALL_SHELL;
  if (wanted === 'browser') return { electron: null, why: 'as OXGALL_SHELL asks' };
  if (process.platform === 'linux' && !environment.DISPLAY && !environment.WAYLAND_DISPLAY)
    return { electron: null, why: 'there is no display for Electron' };
  const found = findElectron();
  if (found) return { electron: found, why: 'its binary is installed' };
  const whyNot = await fetchElectron(wanted === 'electron');
  return whyNot
    ? { electron: null, why: whyNot }
    : { electron: findElectron(), why: 'its binary was fetched' };
}

async function main() {
  const given = process.argv
    .slice(2)
    .map((argument) =>
      argument.startsWith('-') ? argument : resolve(process.env.INIT_CWD ?? process.cwd(), argument),
    );
  await buildStale();
  const { electron, why } = await chooseShell(process.env);
  process.stdout.write(
    electron ? `Oxgall opens in Electron: ${why}.\n` : `Oxgall opens in an installed browser: ${why}.\n`,
  );
  const asRoot = process.platform === 'linux' && process.getuid?.() === 0;
  const [program, args] = electron
    ? [electron, [...(asRoot ? ['--no-sandbox'] : []), root, ...given]]
    : [process.execPath, [join(root, 'dist/main/loopbackShell.js'), ...given]];
  const child = spawn(program, args, { stdio: 'inherit' });
  // The child gets Ctrl-C from the terminal itself; this process only waits for it.
  process.on('SIGINT', () => {});
  process.on('SIGTERM', () => child.kill('SIGTERM'));
  child.once('error', (error) => {
    process.stderr.write(`Oxgall cannot start: ${error.message}\n`);
    process.exitCode = 1;
  });
  child.once('exit', (code) => {
    process.exitCode = code ?? 0;
  });
}

if (process.argv[1] === fileURLToPath(import.meta.url))
  main().catch((error) => {
    process.stderr.write(`${error.message}\n`);
    process.exitCode = 1;
  });
