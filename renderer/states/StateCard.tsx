import { useEffect, useRef, useState } from 'react';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { partings } from '../../core/presets/thread.ts';
import type { PresetHistory } from '../../core/recipes/recipe.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { returnTo, writeBeside } from '../app/memoryWork.ts';
import { useOutput } from '../app/outputWork.ts';
import { SmallPicture } from '../presets/SmallPicture.tsx';
import { wholeLongEdgeMm } from '../print/printMeasures.ts';
import type { Look } from '../state/lookStore.ts';
import type { ComparedSide } from '../state/memoryStore.ts';
import { compare } from './comparing.ts';
import { useStatePicture } from './statePictures.ts';
import { sentenceOfState, timeInWords, wordsOfDelivery } from './stateWords.ts';
import { toRem } from './threadLayout.ts';

interface CardProps {
  state: State;
  history: PresetHistory;
  look: Look;
  photo: OpenedPhoto;
  branch: string | null;
  isReadOnly: boolean;
  /** Where the state stands in the part of the thread that is in view. */
  xPx: number;
  threadWidthPx: number;
  /** Something was written; the keyboard goes back to the numeral. */
  onFinished: () => void;
}

const cardWidthPx = 340;

/** What one state is: its picture, what it changed, what was said of it, and what can be done with it. */
export function StateCard(props: CardProps) {
  const { state, history, look, photo, branch, isReadOnly, xPx, threadWidthPx, onFinished } = props;
  const picture = useStatePicture(photo.photoId, state, wholeLongEdgeMm(photo, useOutput()));
  const isPresent = state.id === look.stateId;
  const beginsBranch = branch !== null || isFollower(history, state);
  const note = history.margins[state.id]?.note ?? state.note;
  const deliveries = history.deliveries.filter(({ stateId }) => stateId === state.id);
  const leftPx = Math.max(8, Math.min(threadWidthPx - cardWidthPx - 8, xPx - cardWidthPx / 2));
  const side: ComparedSide = { kind: 'state', preset: history.preset, stateId: state.id };
  return (
    <section
      className="state-card"
      style={{ left: toRem(leftPx), width: toRem(cardWidthPx) }}
      aria-label={`State ${toRoman(state.number)}`}
    >
      <div className="card-head">
        <SmallPicture picture={picture} shape={photo.widthPx / photo.heightPx} />
        <div className="card-words">
          <h3>
            State {toRoman(state.number)}
            {isPresent && <span className="card-present">, on the easel</span>}
          </h3>
          <p className="card-sentence">{sentenceOfState(state, history.states)}</p>
          <p className="card-time">
            {timeInWords(state.time)}, engine {state.engineVersion}
          </p>
        </div>
      </div>
      {deliveries.length > 0 && (
        <ul className="card-deliveries" aria-label="Delivered files">
          {deliveries.map((delivery) => (
            <li key={`${delivery.path} ${delivery.time}`} title={`SHA-256 ${delivery.sha256}`}>
              <span className="card-file">{delivery.path}</span>,{' '}
              {wordsOfDelivery(delivery, state, history.deliveries)}
            </li>
          ))}
        </ul>
      )}
      <WrittenField
        label="Note"
        text={note}
        placeholder="why it was kept"
        isReadOnly={isReadOnly}
        onWritten={(text) => void writeBeside(history.preset, state.id, { note: text })}
        onFinished={onFinished}
      />
      {beginsBranch && (
        <WrittenField
          label="Branch"
          text={branch ?? ''}
          placeholder="a name for what follows"
          isReadOnly={isReadOnly}
          onWritten={(text) => void writeBeside(history.preset, state.id, { branch: text })}
          onFinished={onFinished}
        />
      )}
      <div className="card-foot">
        <button
          type="button"
          className="quiet-button"
          disabled={isReadOnly || (isPresent && sameAsKept(look))}
          title="Lays this state on the easel as a new one; nothing is lost"
          onClick={() => void returnTo(history.preset, state)}
        >
          Return to {toRoman(state.number)}
        </button>
        <CompareWith side={side} state={state} history={history} />
      </div>
    </section>
  );
}

function CompareWith({ side, state, history }: { side: ComparedSide; state: State; history: PresetHistory }) {
  return (
    <label className="card-compare">
      <span className="unseen">Compare State {toRoman(state.number)} with</span>
      <select
        value=""
        onChange={(event) => {
          const { value } = event.target;
          if (value === 'easel') compare(side);
          else if (value) compare(side, { kind: 'state', preset: history.preset, stateId: value });
        }}
      >
        <option value="">Compare with…</option>
        <option value="easel">the easel as it is</option>
        {history.states
          .filter(({ id }) => id !== state.id)
          .map(({ id, number, note }) => (
            <option key={id} value={id}>
              State {toRoman(number)}
              {note ? `, ${note.slice(0, 40)}` : ''}
            </option>
          ))}
      </select>
    </label>
  );
}

interface WrittenProps {
  label: string;
  text: string;
  placeholder: string;
  isReadOnly: boolean;
  onWritten: (text: string) => void;
  /** The line is done; the keyboard goes back to the thread. */
  onFinished: () => void;
}

/** A line that is written beside the state; it is kept on leaving it or with Enter, and left as it was with Escape. */
function WrittenField(props: WrittenProps) {
  const { label, text, placeholder, isReadOnly, onWritten, onFinished } = props;
  const [words, setWords] = useState(text);
  /** What is to be written on leaving; null for nothing. */
  const unwritten = useRef<string | null>(null);
  const finish = () => {
    const next = unwritten.current?.trim() ?? text;
    unwritten.current = null;
    if (next !== text) onWritten(next);
  };
  const finishLast = useRef(finish);
  finishLast.current = finish;
  // The card may go before the field has lost its focus.
  useEffect(() => () => finishLast.current(), []);
  return (
    <label className="card-field">
      <span>{label}</span>
      <input
        type="text"
        value={words}
        placeholder={placeholder}
        maxLength={400}
        readOnly={isReadOnly}
        onChange={({ target }) => {
          setWords(target.value);
          unwritten.current = target.value;
        }}
        onBlur={finish}
        onKeyDown={(event) => {
          if (event.key === 'Escape') {
            unwritten.current = null;
            return;
          }
          // The thread's own arrow keys stay out of the text.
          event.stopPropagation();
          if (event.key !== 'Enter') return;
          finish();
          onFinished();
        }}
      />
    </label>
  );
}

function isFollower({ states }: PresetHistory, state: State): boolean {
  return partings(states).some(({ followers }) =>
    followers.some((follower) => follower.state.id === state.id),
  );
}

function sameAsKept({ parameters, presetParameters }: Look): boolean {
  return JSON.stringify(parameters) === JSON.stringify(presetParameters);
}
