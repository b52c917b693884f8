import { useEffect, useState } from "react";
import { href } from "react-router";
import { listDrafts } from "#app/components/bench/draft-store.ts";
import { LinkButton } from "#app/components/link-button.tsx";
import { Notice } from "#app/components/notice.tsx";
import type { FitDraft } from "#app/domain/fit-draft.ts";

/**
 * Says which fit checks lie on this phone and have not arrived: begun ones, and those that wait
 * for their connection. Of one print, or of all.
 */
export function KeptFitChecks({ personKey, printId }: { personKey: string; printId?: string }) {
  const [drafts, setDrafts] = useState<FitDraft[]>([]);
  useEffect(() => setDrafts(listDrafts(personKey)), [personKey]);
  return drafts
    .filter((draft) => printId === undefined || draft.printId === printId)
    .map((draft) => (
      <Notice
        key={draft.draftKey}
        kind="info"
        action={
          <LinkButton to={href("/prints/:printId/fit-checks/new", { printId: draft.printId })} weight="secondary">
            {draft.finished ? "Send it" : "Go on"}
          </LinkButton>
        }
      >
        {draft.label}: a fit check {draft.finished ? "waits on this phone to be sent." : "is begun on this phone."}
      </Notice>
    ));
}
