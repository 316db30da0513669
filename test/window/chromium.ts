import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { findChromium } from '../../main/shells/findChromium.ts';

/** The browser for the window tests, or why there is none. */
export type FoundChromium = { path: string; reason: null } | { path: null; reason: string };

const installTimeoutMs = 300_000;

/**
 * Finds a Chromium: what `OXGALL_CHROMIUM` names, else on PATH or in the usual places. Where none is installed
 * and this is Debian with root rights, the system's package is installed.
 */
export function provideChromium(): FoundChromium {
  const found = findChromium();
  if (found) return { path: found, reason: null };
  if (process.env.OXGALL_CHROMIUM)
    return { path: null, reason: `OXGALL_CHROMIUM names no program: ${process.env.OXGALL_CHROMIUM}` };
  if (!existsSync('/etc/debian_version') || process.getuid?.() !== 0)
    return { path: null, reason: 'no Chromium is installed, and this is not Debian with root rights' };
  const run = (...given: string[]) =>
    spawnSync('apt-get', given, {
      env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
      timeout: installTimeoutMs,
      encoding: 'utf8',
    });
  run('update');
  const installed = run('install', '-y', '--no-install-recommends', 'chromium', 'fonts-dejavu-core');
  const path = findChromium();
  if (path) return { path, reason: null };
  return { path: null, reason: `apt-get could not install Chromium: ${installed.stderr.slice(-300)}` };
}

export const chromiumFound = provideChromium();
// Continuous integration must not pass on tests that did not run.
if (!chromiumFound.path && process.env.CI)
  throw new Error(`No window tests without a browser: ${chromiumFound.reason}`);
if (!chromiumFound.path) process.stderr.write(`Window tests are skipped: ${chromiumFound.reason}\n`);
