import { accessSync, constants, statSync } from 'node:fs';
import { delimiter, join } from 'node:path';

const namesOnPath = [
  'chromium',
  'chromium-browser',
  'google-chrome',
  'google-chrome-stable',
  'chrome',
  'microsoft-edge',
  'microsoft-edge-stable',
  'brave-browser',
];

const usualPlaces: Partial<Record<NodeJS.Platform, string[]>> = {
  linux: ['/usr/bin/chromium', '/snap/bin/chromium', '/opt/google/chrome/chrome'],
  darwin: [
    '/Applications/Chromium.app/Contents/MacOS/Chromium',
    '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
    '/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge',
  ],
  win32: ['ProgramFiles', 'ProgramFiles(x86)', 'LOCALAPPDATA'].flatMap((variable) => {
    const folder = process.env[variable];
    return folder
      ? [
          join(folder, 'Google/Chrome/Application/chrome.exe'),
          join(folder, 'Microsoft/Edge/Application/msedge.exe'),
          join(folder, 'Chromium/Application/chrome.exe'),
        ]
      : [];
  }),
};

/**
 * An installed browser that can show an app window.
 * @returns its path: what `OXGALL_CHROMIUM` names, else the first found on PATH or in the usual places; null
 *   where there is none, or where the variable names no program
 */
export function findChromium(
  environment: NodeJS.ProcessEnv = process.env,
  platform: NodeJS.Platform = process.platform,
): string | null {
  const named = environment.OXGALL_CHROMIUM;
  if (named) return isProgram(named) ? named : null;
  const suffix = platform === 'win32' ? '.exe' : '';
  const folders = (environment.PATH ?? '').split(delimiter).filter(Boolean);
  const onPath = namesOnPath.flatMap((name) => folders.map((folder) => join(folder, name + suffix)));
  return [...onPath, ...(usualPlaces[platform] ?? [])].find(isProgram) ?? null;
}

function isProgram(path: string): boolean {
  try {
    accessSync(path, constants.X_OK);
    return statSync(path).isFile();
  } catch {
    return false;
  }
}
