import { cancelOpening } from '../app/photoWork.ts';
import { type OpeningState, openingStore } from '../state/photoStore.ts';

/** A photo is on its way, or did not arrive. */
export function OpeningSign({ opening }: { opening: OpeningState }) {
  if (opening.trouble)
    return (
      <div className="opening-sign work-trouble" role="alert">
        <p>
          {opening.trouble.message} {opening.trouble.remedy}
        </p>
        <button
          type="button"
          className="plain-button"
          onClick={() => openingStore.set({ path: null, trouble: null })}
        >
          Put away
        </button>
      </div>
    );
  return (
    <div className="opening-sign" role="status">
      <span className="work-stroke" aria-hidden="true" />
      <span>Opening {opening.path?.split(/[\\/]/).at(-1)}</span>
      <button type="button" className="plain-button" onClick={cancelOpening}>
        Cancel
      </button>
    </div>
  );
}
