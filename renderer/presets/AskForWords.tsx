import { type FormEvent, useState } from 'react';

interface AskProps {
  label: string;
  start: string;
  verb: string;
  /** The most letters that may be given. */
  longest: number;
  onDone: (words: string) => void;
  onCancel: () => void;
}

/** One line that a step needs before it can be taken; Escape takes the question back. */
export function AskForWords({ label, start, verb, longest, onDone, onCancel }: AskProps) {
  const [words, setWords] = useState(start);
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (words.trim() !== '') onDone(words.trim());
  };
  return (
    <form className="desk-ask" onSubmit={submit}>
      <label>
        <span>{label}</span>
        <input
          type="text"
          // biome-ignore lint/a11y/noAutofocus: the field was asked for by the button just pressed
          autoFocus
          maxLength={longest}
          value={words}
          onChange={(event) => setWords(event.target.value)}
          onKeyDown={(event) => {
            event.stopPropagation();
            if (event.key === 'Escape') onCancel();
          }}
        />
      </label>
      <button type="submit" className="quiet-button" disabled={words.trim() === ''}>
        {verb}
      </button>
    </form>
  );
}
