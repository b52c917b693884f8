import { dateText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export type AnswerWord = "approved" | "refused" | "reconfirmed";
export type RecordedHow = "text-message" | "e-mail" | "call" | "in-person" | "letter";

export interface CustomerAnswer {
  id: string;
  revisionId: string;
  ordinal: number;
  answer: AnswerWord;
  reason: string;
  modelSha256: string;
  sinceAnswerId: string | null;
  changesSeen: boolean;
  byName: string;
  at: Date;
  recordedHow: RecordedHow | null;
  recordedByName: string | null;
  saidOn: string | null;
  pictureFileId: string | null;
}

/** The customer's answers to any revision of the part, newest first. */
export async function listAnswersOfPart(tx: Tx, partId: string): Promise<CustomerAnswer[]> {
  const rows = (await tx("customer_answers as a")
    .join("revisions as r", "r.id", "a.revision_id")
    .where("r.part_id", partId)
    .orderBy("a.at", "desc")
    .select("a.id", "a.revision_id", "r.ordinal", "a.answer", "a.reason", "a.model_sha256", "a.since_answer_id", "a.changes_seen", "a.by_name", "a.at", "a.recorded_how", "a.recorded_by_name", "a.picture_file_id", dateText(tx, "a.said_on"))) as Array<{
    id: string; revision_id: string; ordinal: number; answer: AnswerWord; reason: string; model_sha256: string; since_answer_id: string | null; changes_seen: boolean; by_name: string; at: Date; recorded_how: RecordedHow | null; recorded_by_name: string | null; said_on: string | null; picture_file_id: string | null;
  }>;
  return rows.map((row) => ({
    id: row.id,
    revisionId: row.revision_id,
    ordinal: row.ordinal,
    answer: row.answer,
    reason: row.reason,
    modelSha256: row.model_sha256,
    sinceAnswerId: row.since_answer_id,
    changesSeen: row.changes_seen,
    byName: row.by_name,
    at: row.at,
    recordedHow: row.recorded_how,
    recordedByName: row.recorded_by_name,
    saidOn: row.said_on,
    pictureFileId: row.picture_file_id,
  }));
}

export interface NewAnswer {
  shopId: string;
  jobId: string;
  revisionId: string;
  answer: AnswerWord;
  reason: string;
  modelSha256: string;
  sinceAnswerId: string | null;
  changesSeen: boolean;
  by: { personId: string | null; guestLinkId: string | null; name: string };
  recorded: { how: RecordedHow; byName: string; saidOn: string; pictureFileId: string | null } | null;
}

export async function addAnswer(tx: Tx, answer: NewAnswer): Promise<string> {
  const [row] = await tx("customer_answers")
    .insert({
      shop_id: answer.shopId,
      job_id: answer.jobId,
      revision_id: answer.revisionId,
      answer: answer.answer,
      reason: answer.reason,
      model_sha256: answer.modelSha256,
      since_answer_id: answer.sinceAnswerId,
      changes_seen: answer.changesSeen,
      by_person_id: answer.by.personId,
      by_guest_link_id: answer.by.guestLinkId,
      by_name: answer.by.name,
      recorded_how: answer.recorded?.how ?? null,
      recorded_by_name: answer.recorded?.byName ?? null,
      said_on: answer.recorded?.saidOn ?? null,
      picture_file_id: answer.recorded?.pictureFileId ?? null,
    })
    .returning("id");
  return row.id as string;
}

/** Pictures of answers that were uploaded for a revision: a photographed text message. */
export async function listAnswerPictures(tx: Tx, revisionId: string): Promise<Array<{ id: string; name: string }>> {
  return tx("files").whereRaw("target @> ?::jsonb", [JSON.stringify({ to: "answer", id: revisionId })]).where({ state: "stored", kind: "photo" }).orderBy("created_at", "desc").select("id", "name");
}
