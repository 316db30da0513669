import { homedir } from 'node:os';
import { join } from 'node:path';

/**
 * Where the program keeps what is its own: recents, drafts, window state. `OXGALL_DATA` names another place.
 * @param environment the process's own unless given
 */
export function dataFolder(
  environment: NodeJS.ProcessEnv = process.env,
  platform: NodeJS.Platform = process.platform,
  home: string = homedir(),
): string {
  if (environment.OXGALL_DATA) return environment.OXGALL_DATA;
  if (platform === 'darwin') return join(home, 'Library', 'Application Support', 'Oxgall');
  if (platform === 'win32') return join(environment.APPDATA ?? join(home, 'AppData', 'Roaming'), 'Oxgall');
  return join(environment.XDG_DATA_HOME || join(home, '.local', 'share'), 'oxgall');
}
