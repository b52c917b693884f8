import { useCallback, useEffect, useState } from "react";
import { keepDraft, newKey, readDraft } from "#app/components/bench/draft-store.ts";
import type { ChangeDraft } from "#app/components/bench/bench-types.ts";
import { newDraft, type FitDraft } from "#app/domain/fit-draft.ts";
import type { LengthUnit } from "#app/units.ts";

/** The draft of a print as this phone keeps it: read once the page is there, written at every change. */
export function useDraft(personKey: string, print: { id: string; label: string }, unit: LengthUnit) {
  const { id: printId, label } = print;
  const [draft, setDraft] = useState<FitDraft | null>(null);
  const [kept, setKept] = useState(true);

  const reload = useCallback(() => setDraft(readDraft(personKey, printId) ?? newDraft(newKey(), printId, label, unit)), [personKey, printId, label, unit]);

  // Storage is the browser's: the server draws the page without it. The unit is that of the first look.
  useEffect(() => {
    setDraft((before) => before ?? readDraft(personKey, printId) ?? newDraft(newKey(), printId, label, unit));
  }, [personKey, printId, label, unit]);

  // Written at every change, before anything is sent; a page that was only opened leaves nothing behind.
  useEffect(() => {
    if (draft && draft.matingPartId !== null) setKept(keepDraft(personKey, draft));
  }, [personKey, draft]);

  const change: ChangeDraft = useCallback((how) => setDraft((before) => before && how(before)), []);
  return { draft, kept, change, reload };
}
