import { join } from 'node:path';
import { z } from 'zod';
import { readJsonFile, writeJsonFile } from '../host/jsonFile.ts';

export interface Bounds {
  x: number;
  y: number;
  width: number;
  height: number;
}

export interface WindowState {
  /** Where the window was; left to the system where it has never been open. */
  bounds: Partial<Bounds> & { width: number; height: number };
  maximized: boolean;
}

const fileSchema = z.object({
  format: z.literal('oxgall-window'),
  schema: z.literal(1),
  bounds: z.object({ x: z.number(), y: z.number(), width: z.number(), height: z.number() }),
  maximized: z.boolean(),
});

export const smallestWindow = { width: 960, height: 640 };
const firstWindow = { width: 1440, height: 900 };
/** So much of the title bar has to lie on a display for the window to be within reach. */
const withinReachPx = 80;

/** Where the window shall be: as it was, unless that place is on no display any more. */
export async function loadWindowState(folder: string, displays: readonly Bounds[]): Promise<WindowState> {
  const file = await readJsonFile(join(folder, 'window.json'), fileSchema);
  if (!file) return { bounds: firstWindow, maximized: false };
  const width = Math.max(smallestWindow.width, file.bounds.width);
  const height = Math.max(smallestWindow.height, file.bounds.height);
  const { x, y } = file.bounds;
  const reachable = displays.some(
    (display) =>
      x + width >= display.x + withinReachPx &&
      x <= display.x + display.width - withinReachPx &&
      y >= display.y &&
      y <= display.y + display.height - withinReachPx,
  );
  return { bounds: reachable ? { x, y, width, height } : { width, height }, maximized: file.maximized };
}

export async function saveWindowState(folder: string, bounds: Bounds, maximized: boolean): Promise<void> {
  const { x, y, width, height } = bounds;
  await writeJsonFile(join(folder, 'window.json'), {
    format: 'oxgall-window',
    schema: 1,
    bounds: { x, y, width, height },
    maximized,
  });
}
