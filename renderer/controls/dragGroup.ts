import { endDrag } from '../state/lookStore.ts';
import type { ChangeGroup } from '../state/undoHistory.ts';

let nextDrag = 1;

/** A drag's own undo group: everything between the button going down and up is one step. */
export function startDragGroup(name: string): ChangeGroup {
  const group = { name: `${name}, drag ${nextDrag++}`, held: true };
  const finish = () => {
    window.removeEventListener('pointerup', finish);
    window.removeEventListener('pointercancel', finish);
    endDrag();
  };
  window.addEventListener('pointerup', finish);
  window.addEventListener('pointercancel', finish);
  return group;
}
