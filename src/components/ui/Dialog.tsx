/** Modal dialogs on the platform's own element: it traps focus, closes on Escape and returns focus by itself. */
import { X } from 'lucide-react';
import { useEffect, useId, useRef, useState, type ReactNode } from 'react';
import { Button, type ButtonSize, type ButtonVariant } from './Button.tsx';

export function Dialog({
  open,
  onClose,
  title,
  children,
  actions,
}: {
  open: boolean;
  onClose: () => void;
  title: ReactNode;
  children: ReactNode;
  actions?: ReactNode;
}) {
  const element = useRef<HTMLDialogElement>(null);
  const titleId = useId();
  useEffect(() => {
    const dialog = element.current;
    if (open && !dialog?.open) dialog?.showModal();
    if (!open && dialog?.open) dialog.close();
  }, [open]);
  return (
    <dialog
      ref={element}
      aria-labelledby={titleId}
      onClose={onClose}
      className="m-auto w-[min(34rem,calc(100vw-2rem))] border border-edge bg-panel p-0 text-ink backdrop:bg-ink/40 dark:backdrop:bg-paper/70"
    >
      {open && (
        <div className="p-5">
          <div className="mb-3 flex items-start justify-between gap-4">
            <h2 id={titleId} className="text-xl font-semibold">
              {title}
            </h2>
            <button type="button" onClick={onClose} aria-label="Close" className="-m-1 p-2 text-soft hover:text-ink">
              <X aria-hidden="true" className="h-5 w-5" />
            </button>
          </div>
          {children}
          {actions && <div className="mt-5 flex flex-wrap justify-end gap-2">{actions}</div>}
        </div>
      )}
    </dialog>
  );
}

/** A button that asks once before it does something that cannot be undone. `onConfirm` answers when it is done. */
export function ConfirmButton({
  children,
  title,
  question,
  confirm,
  onConfirm,
  variant = 'quiet',
  size,
  label,
}: {
  children: ReactNode;
  title: string;
  question: ReactNode;
  /** The verb: "Remove Ada", never "OK". */
  confirm: string;
  onConfirm: () => Promise<void> | void;
  variant?: ButtonVariant;
  size?: ButtonSize;
  /** Spoken name when the words alone do not say what is acted on. */
  label?: string;
}) {
  const [open, setOpen] = useState(false);
  const [pending, setPending] = useState(false);
  async function go(): Promise<void> {
    setPending(true);
    try {
      await onConfirm();
    } finally {
      setPending(false);
      setOpen(false);
    }
  }
  return (
    <>
      <Button variant={variant} {...(size ? { size } : {})} aria-label={label} onClick={() => setOpen(true)}>
        {children}
      </Button>
      <Dialog
        open={open}
        onClose={() => setOpen(false)}
        title={title}
        actions={
          <>
            <Button onClick={() => setOpen(false)}>Keep as it is</Button>
            <Button variant="danger" pending={pending} onClick={() => void go()}>
              {confirm}
            </Button>
          </>
        }
      >
        <div className="text-soft">{question}</div>
      </Dialog>
    </>
  );
}
