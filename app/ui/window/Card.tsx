import { type ReactNode, useEffect, useRef } from "react";

interface CardProps {
  readonly title: string;
  readonly note?: string;
  readonly children: ReactNode;
  readonly testId: string;
  onClose(): void;
}

/** A card over the window; Escape or its button closes it, and the focus goes back where it was. */
export function Card({ title, note, children, testId, onClose }: CardProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  useEffect(() => {
    const element = dialog.current;
    if (element !== null && !element.open) element.showModal();
  }, []);
  return (
    <dialog ref={dialog} className="card" aria-label={title} data-testid={testId} onCancel={onClose} onClose={onClose}>
      <header>
        <h2>{title}</h2>
        {note !== undefined && <span className="note">{note}</span>}
        <button type="button" className="plain" onClick={onClose} aria-label="Close">
          Close <kbd>Esc</kbd>
        </button>
      </header>
      {children}
    </dialog>
  );
}
