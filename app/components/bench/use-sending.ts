import { useCallback, useEffect, useRef, useState } from "react";
import { readDraft } from "#app/components/bench/draft-store.ts";
import { sendDraft, type SendState } from "#app/components/bench/send-draft.ts";

/** How often an unanswered draft is tried again without being asked, while the page is open. */
const againMs = 10_000;

/**
 * Sends the draft of a print as soon as it can: at once, when the connection comes back, when the
 * page is looked at again, and every ten seconds while it waits.
 */
export function useSending(personKey: string, printId: string, ready: boolean) {
  const [sending, setSending] = useState<SendState | null>(null);
  const busy = useRef(false);

  const send = useCallback(async () => {
    // Read anew each time: attempts and the stored fit check stand in the kept draft.
    const draft = readDraft(personKey, printId);
    if (busy.current || !draft?.finished) return;
    busy.current = true;
    try {
      setSending(await sendDraft(personKey, draft, setSending));
    } finally {
      busy.current = false;
    }
  }, [personKey, printId]);

  const waiting = sending?.state === "waiting";
  useEffect(() => {
    if (!ready) return;
    if (sending === null) void send();
    const timer = waiting ? setInterval(() => void send(), againMs) : undefined;
    const again = () => void (document.visibilityState === "visible" && waiting && send());
    addEventListener("online", again);
    document.addEventListener("visibilitychange", again);
    return () => {
      clearInterval(timer);
      removeEventListener("online", again);
      document.removeEventListener("visibilitychange", again);
    };
  }, [ready, waiting, sending, send]);

  const stop = useCallback(() => setSending(null), []);
  return { sending, send, stop };
}
