import { href, Link } from "react-router";
import { buttonClass } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import type { SendState } from "#app/components/bench/send-draft.ts";

export interface SendingStepProps {
  sending: SendState | null;
  /** The page to come back to after signing in. */
  here: string;
  onSend: () => void;
  /** Opens the draft again; null when the server may have it by now. */
  onChange: (() => void) | null;
  onThrowAway: () => void;
  onLeavePhotoOut: (id: string) => void;
}

/** A fit check that was given out of hand: being sent, waiting for its connection, refused, or stored. */
export function SendingStep({ sending, here, onSend, onChange, onThrowAway, onLeavePhotoOut }: SendingStepProps) {
  const again = (
    <button type="button" className={`${buttonClass("primary", true)} w-full`} onClick={onSend}>
      Try now
    </button>
  );
  const change = onChange && (
    <button type="button" className={`${buttonClass("secondary")} w-full`} onClick={onChange}>
      Go back and change it
    </button>
  );
  switch (sending?.state) {
    case undefined:
    case "sending":
      return (
        <div role="status" className="mt-10 flex-1">
          <h1 className="text-sentence">{sending?.what ?? "Sending the fit check"} …</h1>
          <p className="text-soft">It is kept on this phone until it has arrived.</p>
        </div>
      );
    case "waiting":
      return (
        <div role="status" className="mt-10 grid flex-1 content-start gap-4">
          <h1 className="text-sentence">{sending.photos > 0 ? `Stored. ${sending.photos === 1 ? "One photo waits" : `${sending.photos} photos wait`} for the connection.` : "Kept on this phone. It waits for the connection."}</h1>
          <p className="text-soft">It is sent once, by itself, when the connection is back and this page is open. You may close the page: open this print's fit check on the same phone, and it goes on.</p>
          {again}
          {change}
        </div>
      );
    case "signed-out":
      return (
        <div className="mt-10 grid flex-1 content-start gap-4">
          <h1 className="text-sentence">You were signed out meanwhile.</h1>
          <p className="text-soft">The fit check is kept on this phone. Sign in again on it, and it is sent.</p>
          <Link to={`/sign-in?next=${encodeURIComponent(here)}`} reloadDocument className={`${buttonClass("primary", true)} w-full`}>
            Sign in
          </Link>
        </div>
      );
    case "refused":
      return (
        <div className="mt-6 grid flex-1 content-start gap-4">
          <h1 className="text-sentence">It was not stored.</h1>
          <Notice kind="error">{sending.reason}</Notice>
          {!sending.final && onChange && (
            <button type="button" className={`${buttonClass("primary", true)} w-full`} onClick={onChange}>
              Go back and change it
            </button>
          )}
          {sending.final && <p className="text-soft">Your readings are still on this phone. Note what you need of them before you throw the draft away.</p>}
          {sending.final && change}
          <button type="button" className={`${buttonClass("secondary")} w-full`} onClick={() => confirm("Throw this fit check away? Its readings and photos are gone then.") && onThrowAway()}>
            Throw it away
          </button>
        </div>
      );
    case "photo-refused":
      return (
        <div className="mt-6 grid flex-1 content-start gap-4">
          <h1 className="text-sentence">The fit check is stored, a photo is not.</h1>
          <Notice kind="error">
            {sending.photo.name}: {sending.reason}
          </Notice>
          {again}
          <button type="button" className={`${buttonClass("secondary")} w-full`} onClick={() => onLeavePhotoOut(sending.photo.id)}>
            Leave this photo out
          </button>
        </div>
      );
    case "done":
      return (
        <div role="status" className="mt-10 grid flex-1 content-start gap-4">
          <h1 className="text-sentence">Stored.</h1>
          <Link to={href("/fit-checks/:fitCheckId", { fitCheckId: sending.fitCheckId })} className={`${buttonClass("primary", true)} w-full`}>
            Look at it
          </Link>
        </div>
      );
  }
}
