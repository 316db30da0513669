import type { RunView } from './runCommands.ts';

/** What the host says unasked: `GET /api/events`, server-sent events, the data JSON. */
export interface HostEvents {
  /** How far a long call is. Stages of a save: opening, grain, body, line, compose, writing. */
  progress: { callId: string; fraction01: number; stage: string };
  /** A photo was wholly decoded; `awaitPhoto` answers the same. */
  photoReady: { photoId: string };
  /** A photo's memory was given back. */
  photoClosed: { photoId: string; reason: 'asked' | 'madeRoom' };
  /** The user asked from outside the window: a second start, the menu, a file dropped on the program. */
  openRequested: { kind: 'photo' | 'folder'; path: string };
  /** An entry of the application menu. */
  menu: { command: MenuCommand };
  /** Something of a photo's memory was saved, could not be saved, or changed: ask for it again. */
  memoryChanged: { photoId: string };
  /** Something about a series or its frames is new: ask for it again. */
  seriesChanged: { seriesId: string };
  /** How far a run is. */
  runProgress: { seriesId: string; run: RunView };
  /** The list of recent photos changed. */
  recentsChanged: Record<string, never>;
}

export type HostEventName = keyof HostEvents;

export type HostEvent = { [Name in HostEventName]: { name: Name; data: HostEvents[Name] } }[HostEventName];

export type MenuCommand =
  | 'openPhoto'
  | 'openFolder'
  | 'save'
  | 'undo'
  | 'redo'
  | 'zoomIn'
  | 'zoomOut'
  | 'zoomFit'
  | 'zoomFull'
  | 'closePhoto'
  | 'showKeys';
