import { useStore } from '../state/store.ts';
import { roomStore, seriesStore } from './wallStore.ts';
import { goTo } from './wallWork.ts';

/** The two rooms; nothing while no series hangs. */
export function RoomToggle() {
  const room = useStore(roomStore);
  const isHanging = useStore(seriesStore, (series) => series !== null);
  if (!isHanging) return null;
  return (
    <nav className="rooms" aria-label="Rooms">
      <button
        type="button"
        aria-pressed={room === 'easel'}
        title="One photograph, worked (E)"
        onClick={() => goTo('easel')}
      >
        Easel
      </button>
      <button
        type="button"
        aria-pressed={room === 'wall'}
        title="The whole series, pinned up (W)"
        onClick={() => goTo('wall')}
      >
        Wall
      </button>
    </nav>
  );
}
