import { director } from '../app/easelWork.ts';
import { paintStore } from '../state/paintStore.ts';
import { useStore } from '../state/store.ts';
import { viewStore } from '../state/viewStore.ts';

const words = { no: '', rough: 'Painting', sharp: 'Painting', detail: 'Painting this part at full size' };

/** Says what the painting is doing, offers to stop it, and says in plain words when it went wrong. */
export function WorkSign() {
  const { busy, stopped, trouble, isRough } = useStore(paintStore);
  const bare = useStore(viewStore, (view) => view.bare);
  if (trouble)
    return (
      <div className="work-sign work-trouble" role="alert">
        <p>
          {trouble.message} {trouble.remedy}
        </p>
        <button type="button" className="plain-button" onClick={() => director.goOn()}>
          Try again
        </button>
      </div>
    );
  if (bare) return <div className="work-sign work-still">All paint lifted</div>;
  if (busy !== 'no')
    return (
      <div className="work-sign work-busy" role="status">
        <span className="work-stroke" aria-hidden="true" />
        <span>{words[busy]}</span>
        <button
          type="button"
          className="plain-button"
          title="Stop painting (Escape)"
          onClick={() => director.stop()}
        >
          Stop
        </button>
      </div>
    );
  if (stopped && isRough)
    return (
      <div className="work-sign work-still" role="status">
        <span>Stopped: the picture is coarse</span>
        <button type="button" className="plain-button" onClick={() => director.goOn()}>
          Go on
        </button>
      </div>
    );
  return null;
}
