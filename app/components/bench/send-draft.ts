import { forgetDraft, keepDraft } from "#app/components/bench/draft-store.ts";
import { forgetPhoto, listPhotos, type KeptPhoto } from "#app/components/bench/photo-store.ts";
import { Transfer, TransferRefused } from "#app/components/upload/transfer.ts";
import { submissionOf, type FitDraft } from "#app/domain/fit-draft.ts";

export type SendState =
  | { state: "sending"; what: string }
  /** No answer: the connection is away, or the server is. */
  | { state: "waiting"; photos: number }
  | { state: "signed-out" }
  | { state: "refused"; reason: string; /** Another try can't help: what it was for is sealed or gone. */ final: boolean }
  | { state: "photo-refused"; photo: KeptPhoto; reason: string; fitCheckId: string }
  | { state: "done"; fitCheckId: string };

/**
 * Sends a draft that was given out of hand, then its photos; safe to call again and again. The
 * draft's key lets the server store it once, also when an answer got lost on the way.
 *
 * @param tell hears how far it is
 * @returns where it ended: done, or what it waits for
 */
export async function sendDraft(personKey: string, draft: FitDraft, tell: (state: SendState) => void): Promise<SendState> {
  let { fitCheckId } = draft;
  if (fitCheckId === null) {
    tell({ state: "sending", what: "Sending the fit check" });
    keepDraft(personKey, { ...draft, attempts: draft.attempts + 1 });
    const answer = await post(draft);
    if (answer.state !== "stored") return answer;
    fitCheckId = answer.fitCheckId;
    keepDraft(personKey, { ...draft, attempts: draft.attempts + 1, fitCheckId });
  }
  const photos = await listPhotos(draft.draftKey).catch(() => []);
  for (const [index, photo] of photos.entries()) {
    tell({ state: "sending", what: `The fit check is stored. Sending photo ${index + 1} of ${photos.length}` });
    const refused = await sendPhoto(photo, fitCheckId);
    if (refused === "waiting") return { state: "waiting", photos: photos.length - index };
    if (refused !== null) return { state: "photo-refused", photo, reason: refused, fitCheckId };
    await forgetPhoto(photo.id);
  }
  forgetDraft(personKey, draft.printId);
  return { state: "done", fitCheckId };
}

async function post(draft: FitDraft): Promise<SendState | { state: "stored"; fitCheckId: string }> {
  if (draft.matingPartId === null || draft.triedAt === null) return { state: "refused", reason: "Pick the mating part first.", final: false };
  const body = JSON.stringify(submissionOf({ ...draft, matingPartId: draft.matingPartId, triedAt: draft.triedAt }));
  let answer: Response;
  try {
    answer = await fetch("/api/fit-checks", { method: "POST", body, headers: { "Content-Type": "application/json", Accept: "application/json" } });
  } catch (fault) {
    // fetch has one fault for a line that is down: a TypeError.
    if (fault instanceof TypeError) return { state: "waiting", photos: 0 };
    throw fault;
  }
  if (answer.status >= 500 || answer.status === 429) return { state: "waiting", photos: 0 };
  if (answer.status === 401) return { state: "signed-out" };
  const said: unknown = await answer.json().catch(() => null);
  if (answer.ok) return { state: "stored", fitCheckId: (said as { fitCheckId: string }).fitCheckId };
  const reason = typeof said === "object" && said !== null && "reason" in said ? String(said.reason) : "The server refused it.";
  return { state: "refused", reason, final: answer.status === 409 || answer.status === 404 || answer.status === 403 };
}

/** null when it is sent, "waiting" when the line is down, else why it was refused. */
async function sendPhoto(photo: KeptPhoto, fitCheckId: string): Promise<string | null> {
  const file = new File([photo.blob], photo.name, { type: photo.mediaType });
  const announcement = { name: photo.name, bytes: file.size, sha256: photo.sha256, kind: "photo", mediaType: photo.mediaType, unit: null, target: { to: "fit-check", id: fitCheckId, characteristicId: photo.characteristicId } } as const;
  try {
    await new Transfer(file, announcement, () => undefined).run();
    return null;
  } catch (fault) {
    return fault instanceof TransferRefused ? fault.message : "waiting";
  }
}
