import type { Tx } from "./scope.server.ts";

export interface OutboxMail {
  id: string;
  to: string;
  replyTo: string | null;
  subject: string;
  text: string;
  html: string;
}

/** A mail that was not sent yet, locked until this transaction ends. */
export async function takeMail(tx: Tx, id: string): Promise<OutboxMail | undefined> {
  const { rows } = await tx.raw<{ rows: Array<{ id: string; to_address: string; reply_to: string | null; subject: string; text_body: string; html_body: string }> }>(
    "select id, to_address, reply_to, subject, text_body, html_body from scope.take_mail(?)",
    [id],
  );
  const row = rows[0];
  return row && { id: row.id, to: row.to_address, replyTo: row.reply_to, subject: row.subject, text: row.text_body, html: row.html_body };
}

export async function finishMail(tx: Tx, id: string): Promise<void> {
  await tx.raw("select scope.mail_sent(?)", [id]);
}

export async function failMail(tx: Tx, id: string, error: string): Promise<void> {
  await tx.raw("select scope.mail_failed(?, ?)", [id, error]);
}
