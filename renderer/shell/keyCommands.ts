import { director } from '../app/easelWork.ts';
import { closePhoto } from '../app/photoWork.ts';
import { zoomByKey } from '../easel/Stage.tsx';
import { fitPicture, showFullSize } from '../easel/viewMoves.ts';
import { toggleMarks } from '../state/gamutStore.ts';
import { redoLook, undoLook } from '../state/lookStore.ts';
import { paintStore } from '../state/paintStore.ts';
import { chooseStratum, dialogStore, panelStore } from '../state/panelStore.ts';
import { photoStore } from '../state/photoStore.ts';
import { changeView, viewStore } from '../state/viewStore.ts';
import { endComparing, toggleFlicker } from '../states/comparing.ts';
import { keepingStore, threadCallStore } from '../states/threadCalls.ts';
import { wallKeys } from '../wall/wallKeys.ts';
import { roomStore, wallSheetStore } from '../wall/wallStore.ts';
import { goTo } from '../wall/wallWork.ts';

/** A key that works wherever nothing is being typed. */
export interface KeyCommand {
  /** `event.key`, lower case; several where keyboards differ. */
  keys: readonly string[];
  /** With Control, or Command on a Mac. */
  withControl?: boolean;
  withShift?: boolean;
  shown: string;
  does: string;
  run: () => void;
  /** For keys that act as long as they are held. */
  release?: () => void;
}

export function toggleSplit(): void {
  if (viewStore.get().split01 === null) changeView({ split01: 0.5 });
  else endComparing();
}

/** To the present state, so that the arrow keys go on from it. */
function focusThread(): void {
  threadCallStore.update((calls) => calls + 1);
}

export const keyCommands: readonly KeyCommand[] = [
  {
    keys: ['o'],
    withControl: true,
    shown: 'Ctrl O',
    does: 'Open a photograph',
    run: () => dialogStore.set('open'),
  },
  {
    keys: ['s'],
    withControl: true,
    shown: 'Ctrl S',
    does: 'Save the painting',
    run: () => dialogStore.set('save'),
  },
  { keys: ['z'], withControl: true, shown: 'Ctrl Z', does: 'Undo', run: undoLook },
  {
    keys: ['z'],
    withControl: true,
    withShift: true,
    shown: 'Ctrl Shift Z, Ctrl Y',
    does: 'Redo',
    run: redoLook,
  },
  { keys: ['+', '='], shown: '+', does: 'Zoom in', run: () => zoomByKey(1) },
  { keys: ['-', '−', '_'], shown: '−', does: 'Zoom out', run: () => zoomByKey(-1) },
  { keys: ['0'], shown: '0', does: 'Fit the picture to the window', run: fitPicture },
  { keys: ['1'], shown: '1', does: 'Show the picture at 100 %', run: showFullSize },
  {
    keys: ['l'],
    shown: 'L, held',
    does: 'Lift all paint off the photograph',
    run: () => changeView({ bare: true }),
    release: () => changeView({ bare: false }),
  },
  { keys: ['c'], shown: 'C', does: 'Compare photograph and painting side by side', run: toggleSplit },
  {
    keys: ['k'],
    shown: 'K',
    does: 'Keep the easel as a new state',
    run: () => keepingStore.set(true),
  },
  { keys: ['t'], shown: 'T', does: 'To the states; the arrows walk along them', run: focusThread },
  { keys: ['v'], shown: 'V', does: 'Let two compared states take turns', run: toggleFlicker },
  { keys: ['m'], shown: 'M', does: 'Mark what the paper cannot hold, or no longer', run: toggleMarks },
  { keys: ['p'], shown: 'P', does: 'Presets', run: () => panelStore.set('presets') },
  { keys: ['g'], shown: 'G', does: 'Controls of the ground', run: () => chooseStratum('ground') },
  { keys: ['b'], shown: 'B', does: 'Controls of the body', run: () => chooseStratum('body') },
  { keys: ['i'], shown: 'I', does: 'Controls of the line, the ink', run: () => chooseStratum('line') },
  { keys: ['r'], shown: 'R', does: 'Controls of the relief', run: () => chooseStratum('relief') },
  { keys: ['f'], shown: 'F', does: 'Print: the file for the printer', run: () => panelStore.set('print') },
  {
    keys: ['escape'],
    shown: 'Escape',
    does: 'Stop painting; end comparing',
    run: () => {
      if (paintStore.get().busy !== 'no') director.stop();
      else if (viewStore.get().split01 !== null) endComparing();
    },
  },
  {
    keys: ['w'],
    withControl: true,
    withShift: true,
    shown: 'Ctrl Shift W',
    does: 'Put the photograph away',
    run: () => void closePhoto(),
  },
  { keys: ['w'], shown: 'W', does: 'To the wall, where a series hangs', run: () => goTo('wall') },
  { keys: ['?'], shown: '?', does: 'This list', run: () => dialogStore.set('keys') },
];

function isTyping(target: EventTarget | null): boolean {
  if (!(target instanceof HTMLElement)) return false;
  if (target instanceof HTMLInputElement) return target.type === 'text' || target.type === 'number';
  return target instanceof HTMLSelectElement || target instanceof HTMLTextAreaElement;
}

function commandFor(
  event: KeyboardEvent,
  commands: readonly KeyCommand[],
): Pick<KeyCommand, 'run' | 'release'> | undefined {
  const key = event.key.toLowerCase();
  const control = event.ctrlKey || event.metaKey;
  if (control && key === 'y') return commands.find(({ shown }) => shown.endsWith('Ctrl Y'));
  return commands.find((command) => {
    if (!command.keys.includes(key) || (command.withControl ?? false) !== control) return false;
    // Signs are reached with Shift on some keyboards, so only letters mind it.
    return /^[a-z]$/.test(key) ? (command.withShift ?? false) === event.shiftKey : true;
  });
}

/** Listens for the whole window; called once. */
export function startKeys(): void {
  const held = new Map<string, () => void>();
  window.addEventListener('keydown', (event) => {
    if (event.altKey || event.defaultPrevented || dialogStore.get() !== 'none') return;
    const control = event.ctrlKey || event.metaKey;
    if (isTyping(event.target) && !control) return;
    const isAtWall = roomStore.get() === 'wall';
    const isAtWork = isAtWall || photoStore.get() !== null;
    if (isAtWall && wallSheetStore.get() !== 'none') return;
    if (!isAtWork && !(control && event.key.toLowerCase() === 'o') && event.key !== '?') return;
    const command = commandFor(event, isAtWall ? wallKeys : keyCommands);
    if (!command) return;
    event.preventDefault();
    if (command.release) {
      if (event.repeat) return;
      held.set(event.code, command.release);
    }
    command.run();
  });
  const releaseAll = () => {
    for (const release of held.values()) release();
    held.clear();
  };
  window.addEventListener('keyup', (event) => {
    held.get(event.code)?.();
    held.delete(event.code);
  });
  window.addEventListener('blur', releaseAll);
}
