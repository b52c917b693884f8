import { useEffect, useId, useRef, useSyncExternalStore, type ReactNode, type RefObject } from "react";
import { useNavigation } from "react-router";
import { EntryForm, SubmitButton, type EntryFormProps } from "#app/components/form.tsx";
import { buttonClass, type ButtonWeight } from "#app/components/link-button.tsx";

export interface ConfirmProps extends Omit<EntryFormProps, "children" | "title" | "className"> {
  /** The button that asks: "Set aside". */
  trigger: ReactNode;
  weight?: ButtonWeight;
  title: string;
  /** What will happen, and whether it can be undone. */
  text: ReactNode;
  confirmText: string;
  /** Hidden values sent along. */
  sends?: Record<string, string>;
  /** Fields such as the reason. */
  children?: ReactNode;
}

const never = () => () => {};

/** Asks before it acts: a native dialog; without scripts the same form unfolds in place. */
export function Confirm({ trigger, weight = "secondary", title, text, confirmText, sends = {}, children, ...form }: ConfirmProps) {
  const dialog = useRef<HTMLDialogElement>(null);
  const id = useId();
  const scripted = useSyncExternalStore(never, () => true, () => false);
  useDialogAfterSending(dialog, form);
  const body = (close?: () => void) => (
    <EntryForm {...form}>
      {Object.entries(sends).map(([name, value]) => (
        <input key={name} type="hidden" name={name} value={value} />
      ))}
      <h2 id={id} className="text-xl">
        {title}
      </h2>
      <div className="mb-5 mt-1 text-soft">{text}</div>
      {children}
      <div className="flex flex-wrap gap-3">
        <SubmitButton pendingText={confirmText}>{confirmText}</SubmitButton>
        {close && (
          <button type="button" className={buttonClass("secondary")} onClick={close}>
            Leave it as it is
          </button>
        )}
      </div>
    </EntryForm>
  );
  if (!scripted) {
    return (
      <details>
        <summary className={buttonClass(weight)}>{trigger}</summary>
        <div className="mt-3 max-w-lg border-[1.5px] border-ink p-5">{body()}</div>
      </details>
    );
  }
  return (
    <>
      <button type="button" className={buttonClass(weight)} onClick={() => dialog.current?.showModal()} aria-haspopup="dialog">
        {trigger}
      </button>
      <dialog
        ref={dialog}
        aria-labelledby={id}
        className="m-auto w-[min(32rem,calc(100vw-1rem))] border-[1.5px] border-ink bg-sheet p-6 text-ink backdrop:bg-ink/40"
      >
        {body(() => dialog.current?.close())}
      </dialog>
    </>
  );
}

/** Comes back open with its faults when it was refused, and closes when it was done. */
function useDialogAfterSending(dialog: RefObject<HTMLDialogElement | null>, { errors, fetcher }: Pick<EntryFormProps, "errors" | "fetcher">) {
  const navigation = useNavigation();
  const sending = (fetcher ?? navigation).state !== "idle";
  const faulty = errors !== undefined && Object.keys(errors).length > 0;
  const sent = useRef(false);
  useEffect(() => {
    if (sending) {
      sent.current = true;
    } else if (faulty) {
      sent.current = false;
      if (dialog.current && !dialog.current.open) dialog.current.showModal();
      dialog.current?.querySelector<HTMLElement>('[aria-invalid="true"]')?.focus();
    } else if (sent.current) {
      sent.current = false;
      dialog.current?.close();
    }
  }, [dialog, sending, faulty, errors]);
}
