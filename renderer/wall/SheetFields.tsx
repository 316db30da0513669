import { chooseFolder } from '../saving/ChooseFolder.tsx';

/** A folder, and a way to another one. */
export function FolderField({
  folder,
  onChange,
  showList,
}: {
  folder: string;
  onChange: (path: string) => void;
  showList: () => void;
}) {
  return (
    <div className="field">
      <span>Folder</span>
      <span className="field-folder">
        <span className="field-path">{folder}</span>
        <button
          type="button"
          className="plain-button"
          onClick={() => void chooseFolder(folder, onChange, showList)}
        >
          Change…
        </button>
      </span>
    </div>
  );
}

interface FewProps<Value extends string> {
  label: string;
  options: readonly { value: Value; name: string }[];
  value: Value;
  onChange: (value: Value) => void;
}

/** One of a few, all of them in sight. */
export function FewField<Value extends string>({ label, options, value, onChange }: FewProps<Value>) {
  return (
    <fieldset className="field few-field">
      <legend>{label}</legend>
      <span className="few">
        {options.map((option) => (
          <label key={option.value} className="few-choice">
            <input
              className="unseen"
              type="radio"
              name={`sheet-${label}`}
              value={option.value}
              checked={option.value === value}
              onChange={() => onChange(option.value)}
            />
            <span>{option.name}</span>
          </label>
        ))}
      </span>
    </fieldset>
  );
}
