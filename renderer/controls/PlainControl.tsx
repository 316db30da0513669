import type { ReactNode } from 'react';

interface PlainControlProps {
  name: string;
  value?: ReactNode;
  /** One sentence; its element's id is for `aria-describedby`. */
  help?: ReactNode;
  helpId?: string;
  /** What went wrong, instead of the help. */
  fault?: string | null;
  /** Beside the name: a way back to another value. */
  reset?: ReactNode;
  dataKey?: string;
  children?: ReactNode;
}

/** Name and value on one line, the control beneath, and a sentence that says what it does. */
export function PlainControl(props: PlainControlProps) {
  const { name, value, help, helpId, fault, reset, dataKey, children } = props;
  return (
    <div className="control" data-key={dataKey}>
      <div className="control-head">
        <span className="control-name">{name}</span>
        {reset}
        <span className="control-value">{value}</span>
      </div>
      {children}
      {fault ? (
        <p className="fault control-fault" id={helpId} role="alert">
          {fault}
        </p>
      ) : (
        help && (
          <p className="control-help" id={helpId}>
            {help}
          </p>
        )
      )}
    </div>
  );
}
