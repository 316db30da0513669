import { readProfileAgain } from '../app/gamutWork.ts';
import { useOutput } from '../app/outputWork.ts';
import { gamutStore, toggleMarks } from '../state/gamutStore.ts';
import { useStore } from '../state/store.ts';
import { gamutSentence } from './gamutWords.ts';

/** Says how much of the picture the chosen print cannot show, and marks it or not; nothing where all is kept. */
export function GamutSign() {
  const { profile } = useOutput();
  const { isMarked, isKnown, share01, trouble } = useStore(gamutStore);
  if (trouble)
    return (
      <div className="gamut-trouble" role="status">
        <p>
          What the print cannot hold is not known. {trouble.message} {trouble.remedy} Or choose other colours
          under Print.
        </p>
        <button type="button" className="plain-button" onClick={readProfileAgain}>
          Look again
        </button>
      </div>
    );
  if (!isKnown) return null;
  const sentence = share01 === null ? 'Looking at the colours' : gamutSentence(share01, profile);
  return (
    <>
      <span className="foot-rule" aria-hidden="true" />
      <span className="gamut-sign">
        {share01 !== 0 && (
          <label className="gamut-check" title="Mark what the paper cannot hold (M)">
            <input
              type="checkbox"
              aria-label="Mark what the paper cannot hold"
              checked={isMarked}
              onChange={toggleMarks}
            />
            <span className="gamut-sample" aria-hidden="true" />
          </label>
        )}
        <span className="gamut-words" role="status" title={sentence}>
          {sentence}
        </span>
      </span>
    </>
  );
}
