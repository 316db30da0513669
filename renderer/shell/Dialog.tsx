import { type ReactNode, useEffect, useId, useRef } from 'react';

interface DialogProps {
  title: string;
  onClose: () => void;
  children: ReactNode;
  className?: string;
}

/** A sheet over the window. The platform's own dialog keeps the focus inside and gives it back. */
export function Dialog({ title, onClose, children, className }: DialogProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const titleId = useId();
  useEffect(() => {
    const element = dialog.current;
    if (element && !element.open) element.showModal();
    element?.querySelector<HTMLElement>('[data-first]')?.focus();
    return () => element?.close();
  }, []);
  return (
    <dialog
      ref={dialog}
      className={`dialog ${className ?? ''}`}
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault();
        onClose();
      }}
      onKeyDown={(event) => event.stopPropagation()}
    >
      <header className="dialog-head">
        <h2 id={titleId}>{title}</h2>
        <button type="button" className="plain-button" title="Close (Escape)" onClick={onClose}>
          Close
        </button>
      </header>
      {children}
    </dialog>
  );
}
