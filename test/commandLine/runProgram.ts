import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));

export interface Ended {
  code: number | null;
  out: string;
  err: string;
}

/**
 * Runs the built program in a folder.
 * @param data the program's own folder; `data` in that folder unless given
 */
export function runIn(folder: string, words: readonly string[], data = join(folder, 'data')): Promise<Ended> {
  const environment = { ...process.env, OXGALL_DATA: data };
  const child = spawn(process.execPath, [program, ...words], { cwd: folder, env: environment });
  let [out, err] = ['', ''];
  child.stdout.on('data', (text) => {
    out += text;
  });
  child.stderr.on('data', (text) => {
    err += text;
  });
  return new Promise((resolve) => child.on('close', (code) => resolve({ code, out, err })));
}
