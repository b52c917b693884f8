import { dateText } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

export interface Question {
  id: string;
  question: string;
}

export async function listQuestions(tx: Tx): Promise<Question[]> {
  return tx("makeability_questions").whereNull("set_aside_at").orderBy("sort").orderBy("created_at").select("id", "question");
}

export interface MachinistAnswer {
  id: string;
  questionId: string | null;
  stance: "agree" | "object";
  text: string;
  closedByName: string | null;
  closedHow: string | null;
  closedAt: Date | null;
}

export interface MachinistReply {
  id: string;
  modelSha256: string;
  priceMinor: number | null;
  readyOn: string | null;
  remark: string;
  recordedHow: string | null;
  byName: string;
  at: Date;
  answers: MachinistAnswer[];
}

/** What machinists said of a revision, newest first. */
export async function listReplies(tx: Tx, revisionId: string): Promise<MachinistReply[]> {
  const replies = (await tx("machinist_replies").where({ revision_id: revisionId }).orderBy("at", "desc").select("id", "model_sha256", "price_minor", "remark", "recorded_how", "by_name", "at", dateText(tx, "ready_on"))) as Array<{
    id: string; model_sha256: string; price_minor: string | null; remark: string; recorded_how: string | null; by_name: string; at: Date; ready_on: string | null;
  }>;
  const answers = (await tx("machinist_answers").where({ revision_id: revisionId })) as Array<{ id: string; reply_id: string; question_id: string | null; stance: "agree" | "object"; text: string; closed_by_name: string | null; closed_how: string | null; closed_at: Date | null }>;
  return replies.map((row) => ({
    id: row.id,
    modelSha256: row.model_sha256,
    priceMinor: row.price_minor === null ? null : Number(row.price_minor),
    readyOn: row.ready_on,
    remark: row.remark,
    recordedHow: row.recorded_how,
    byName: row.by_name,
    at: row.at,
    answers: answers
      .filter(({ reply_id }) => reply_id === row.id)
      .map((answer) => ({ id: answer.id, questionId: answer.question_id, stance: answer.stance, text: answer.text, closedByName: answer.closed_by_name, closedHow: answer.closed_how, closedAt: answer.closed_at })),
  }));
}

export async function addReply(
  tx: Tx,
  reply: {
    shopId: string; jobId: string; revisionId: string; modelSha256: string; priceMinor: number | null; readyOn: string | null; remark: string; recordedHow: string | null;
    by: { personId: string | null; guestLinkId: string | null; name: string };
    answers: Array<{ questionId: string | null; stance: "agree" | "object"; text: string }>;
  },
): Promise<string> {
  const place = { shop_id: reply.shopId, job_id: reply.jobId, revision_id: reply.revisionId };
  const [row] = await tx("machinist_replies")
    .insert({
      ...place,
      model_sha256: reply.modelSha256,
      price_minor: reply.priceMinor,
      ready_on: reply.readyOn,
      remark: reply.remark,
      recorded_how: reply.recordedHow,
      by_person_id: reply.by.personId,
      by_guest_link_id: reply.by.guestLinkId,
      by_name: reply.by.name,
    })
    .returning("id");
  for (const answer of reply.answers) {
    await tx("machinist_answers").insert({ ...place, reply_id: row.id, question_id: answer.questionId, stance: answer.stance, text: answer.text });
  }
  return row.id as string;
}

/** Closes an objection with the way it was settled. Says whether it was open. */
export async function closeObjection(tx: Tx, revisionId: string, answerId: string, by: string, how: string): Promise<boolean> {
  return (await tx("machinist_answers").where({ id: answerId, revision_id: revisionId, stance: "object" }).whereNull("closed_at").update({ closed_at: tx.fn.now(), closed_by_name: by, closed_how: how })) === 1;
}
