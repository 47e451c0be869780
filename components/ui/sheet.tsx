import { useEffect, useId, useRef, type ReactNode } from 'react';
import { Button } from './button.tsx';
import { Heading } from './heading.tsx';

export interface SheetProps {
  title: string;
  open: boolean;
  /** Asked to go away, by Escape, the close button or a press beside it. */
  onClose: () => void;
  children: ReactNode;
}

/**
 * A modal sheet: from the bottom on a phone, a pane at the right when wide. The browser's own dialog keeps the focus inside,
 * makes the page behind inert, closes on Escape and returns the focus to where it was.
 */
export function Sheet({ title, open, onClose, children }: SheetProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const titleId = useId();

  useEffect(() => {
    const element = dialog.current;
    if (element === null || !open) return undefined;
    const before = document.activeElement;
    element.showModal();
    return () => {
      if (element.open) element.close();
      // The browser returns the focus by itself, unless what had it was rendered anew in between.
      if (before instanceof HTMLElement && before.isConnected) before.focus();
    };
  }, [open]);

  if (!open) return null;
  return (
    <dialog
      ref={dialog}
      className="sheet"
      aria-labelledby={titleId}
      onCancel={(event) => {
        event.preventDefault();
        onClose();
      }}
      onClick={(event) => {
        if (event.target === dialog.current) onClose();
      }}
    >
      <div className="sheet-body">
        <div className="sheet-head">
          <Heading level={2} id={titleId}>
            {title}
          </Heading>
          <Button kind="quiet" onPress={onClose}>
            Close
          </Button>
        </div>
        {children}
      </div>
    </dialog>
  );
}
