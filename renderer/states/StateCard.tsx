import { useState } from 'react';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { partings } from '../../core/presets/thread.ts';
import type { PresetHistory } from '../../core/recipes/recipe.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { returnTo, writeBeside } from '../app/memoryWork.ts';
import { SmallPicture } from '../presets/SmallPicture.tsx';
import type { Look } from '../state/lookStore.ts';
import type { ComparedSide } from '../state/memoryStore.ts';
import { compare } from './comparing.ts';
import { useStatePicture } from './statePictures.ts';
import { sentenceOfState, timeInWords } from './stateWords.ts';

interface CardProps {
  state: State;
  history: PresetHistory;
  look: Look;
  photo: OpenedPhoto;
  isDelivered: boolean;
  branch: string | null;
  /** Where the state stands in the part of the thread that is in view. */
  leftPx: number;
  threadWidthPx: number;
}

const cardWidthPx = 340;

/** What one state is: its picture, what it changed, what was said of it, and what can be done with it. */
export function StateCard(props: CardProps) {
  const { state, history, look, photo, isDelivered, branch, leftPx, threadWidthPx } = props;
  const picture = useStatePicture(photo.photoId, state, look.printLongEdgeMm);
  const isPresent = state.id === look.stateId;
  const beginsBranch = branch !== null || isFollower(history, state);
  const note = history.margins[state.id]?.note ?? state.note;
  const left = Math.max(8, Math.min(threadWidthPx - cardWidthPx - 8, leftPx - cardWidthPx / 2));
  const side: ComparedSide = { kind: 'state', preset: history.preset, stateId: state.id };
  return (
    <section
      className="state-card"
      style={{ left: `${left}px` }}
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
      {isDelivered && (
        <ul className="card-deliveries" aria-label="Delivered files">
          {history.deliveries
            .filter(({ stateId }) => stateId === state.id)
            .map((delivery) => (
              <li key={`${delivery.path} ${delivery.time}`}>
                <span className="card-file">{delivery.path}</span>, delivered {timeInWords(delivery.time)}
              </li>
            ))}
        </ul>
      )}
      <WrittenField
        label="Note"
        text={note}
        placeholder="why it was kept"
        onWritten={(text) => void writeBeside(history.preset, state.id, { note: text })}
      />
      {beginsBranch && (
        <WrittenField
          label="Branch"
          text={branch ?? ''}
          placeholder="a name for what follows"
          onWritten={(text) => void writeBeside(history.preset, state.id, { branch: text })}
        />
      )}
      <div className="card-foot">
        <button
          type="button"
          className="quiet-button"
          disabled={isPresent && sameAsKept(look)}
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
  onWritten: (text: string) => void;
}

/** A line that is written beside the state; it is kept on leaving it or with Enter. */
function WrittenField({ label, text, placeholder, onWritten }: WrittenProps) {
  const [words, setWords] = useState(text);
  const finish = () => {
    if (words.trim() !== text) onWritten(words.trim());
  };
  return (
    <label className="card-field">
      <span>{label}</span>
      <input
        type="text"
        value={words}
        placeholder={placeholder}
        maxLength={400}
        onChange={(event) => setWords(event.target.value)}
        onBlur={finish}
        onKeyDown={(event) => {
          // The thread's own arrow keys stay out of the text.
          event.stopPropagation();
          if (event.key === 'Enter') finish();
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
