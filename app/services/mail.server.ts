import type { Tx } from "#app/data/scope.server.ts";
import { sendJob } from "#app/jobs/send.server.ts";

export interface Mail {
  shopId: string | null;
  /** Names the event and the person: queued twice, it is sent once. */
  onceKey: string;
  to: string;
  replyTo?: string | null;
  subject: string;
  paragraphs: string[];
  action?: { label: string; url: string };
}

const escape = (text: string) => text.replace(/[&<>"']/g, (c) => `&#${c.charCodeAt(0)};`);

export function textBody(mail: Mail): string {
  return [...mail.paragraphs, ...(mail.action ? [`${mail.action.label}:\n${mail.action.url}`] : []), "Spotblue"].join("\n\n");
}

export function htmlBody(mail: Mail): string {
  const paragraphs = mail.paragraphs.map((p) => `<p style="margin:0 0 14px">${escape(p)}</p>`).join("");
  const action = mail.action
    ? `<p style="margin:20px 0"><a href="${escape(mail.action.url)}" style="background:#0d2b45;color:#fbf9f4;padding:12px 18px;text-decoration:none">${escape(mail.action.label)}</a></p>
       <p style="margin:0 0 14px;font-size:13px;color:#56697a">${escape(mail.action.url)}</p>`
    : "";
  return `<!doctype html><html lang="en"><body style="margin:0;padding:24px;background:#fbf9f4;color:#0d2b45;font:16px/1.5 Barlow,Helvetica,Arial,sans-serif">
    <div style="max-width:36em;border-top:1.5px solid #0d2b45;padding-top:18px">${paragraphs}${action}<p style="margin:24px 0 0;font-size:13px;color:#56697a">Spotblue</p></div></body></html>`;
}

/** Puts a mail in the outbox, in the caller's transaction; the worker sends it, and sends it once. */
export async function queueMail(tx: Tx, mail: Mail): Promise<void> {
  const { rows } = await tx.raw<{ rows: Array<{ id: string | null }> }>("select scope.queue_mail(?, ?, ?, ?, ?, ?, ?) as id", [
    mail.shopId,
    mail.onceKey,
    mail.to,
    mail.replyTo ?? null,
    mail.subject,
    textBody(mail),
    htmlBody(mail),
  ]);
  const id = rows[0]?.id;
  if (id) await sendJob(tx, "send-mail", { shopId: mail.shopId, id });
}
