interface FewChoicesProps<Value extends string> {
  legend: string;
  name: string;
  choices: readonly { value: Value; label: string; help?: string; fullName?: string }[];
  /** Null where none of them is chosen. */
  value: Value | null;
  describedBy?: string;
  className?: string;
  onChoose: (value: Value) => void;
}

/** Few choices side by side. */
export function FewChoices<Value extends string>(props: FewChoicesProps<Value>) {
  const { legend, name, choices, value, describedBy, className = 'few', onChoose } = props;
  return (
    <fieldset className={className} aria-describedby={describedBy}>
      <legend className="unseen">{legend}</legend>
      {choices.map((choice) => (
        <label key={choice.value} className="few-choice" title={choice.help}>
          <input
            className="unseen"
            type="radio"
            name={name}
            aria-label={choice.fullName}
            value={choice.value}
            checked={choice.value === value}
            onChange={() => onChoose(choice.value)}
          />
          <span>{choice.label}</span>
        </label>
      ))}
    </fieldset>
  );
}
