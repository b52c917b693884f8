import { updateIfUnchanged } from "./rows.server.ts";
import type { Tx } from "./scope.server.ts";

/** A makeability question as the shop edits it. */
export interface ShopQuestion {
  id: string;
  question: string;
  setAside: boolean;
  rowVersion: number;
  /** How many answers machinists gave to it. */
  answers: number;
}

interface QuestionRow {
  id: string;
  question: string;
  set_aside_at: Date | null;
  row_version: number;
  answers: number;
}

const toQuestion = (row: QuestionRow): ShopQuestion => ({ id: row.id, question: row.question, setAside: row.set_aside_at !== null, rowVersion: row.row_version, answers: row.answers });

function selectQuestions(tx: Tx) {
  return tx("makeability_questions as q")
    .select("q.id", "q.question", "q.set_aside_at", "q.row_version")
    .select(tx.raw("(select count(*)::integer from machinist_answers a where a.question_id = q.id) as answers"));
}

/** In the order in which they are asked; those set aside come last. */
export async function listShopQuestions(tx: Tx, { withSetAside }: { withSetAside: boolean }): Promise<ShopQuestion[]> {
  const query = selectQuestions(tx).orderByRaw("q.set_aside_at is not null, q.sort, q.created_at");
  if (!withSetAside) void query.whereNull("q.set_aside_at");
  return ((await query) as QuestionRow[]).map(toQuestion);
}

export async function findShopQuestion(tx: Tx, id: string): Promise<ShopQuestion | undefined> {
  const row = (await selectQuestions(tx).where("q.id", id).first()) as QuestionRow | undefined;
  return row && toQuestion(row);
}

/** @param placeOf the question whose place it takes; left out: it comes last */
export async function addQuestion(tx: Tx, shopId: string, question: string, placeOf?: string): Promise<string> {
  const sort = placeOf
    ? tx.raw("(select sort from makeability_questions where id = ?)", [placeOf])
    : tx.raw("(select coalesce(max(sort), 0) + 1 from makeability_questions)");
  const [row] = await tx("makeability_questions").insert({ shop_id: shopId, question, sort }).returning("id");
  return row.id as string;
}

export async function changeQuestion(tx: Tx, id: string, rowVersion: number, question: string): Promise<boolean> {
  return updateIfUnchanged(tx, "makeability_questions", id, rowVersion, { question });
}
