import { createTransport, type Transporter } from "nodemailer";
import { outsideShops } from "#app/data/scope.server.ts";
import { failMail, finishMail, takeMail } from "#app/data/outbox.server.ts";
import { env } from "#app/env.server.ts";
import type { JobPayload } from "./queues.ts";

let transport: Transporter | undefined;

/**
 * Sends one mail of the outbox. The row is locked while it is sent, so that a second run of
 * the job waits and then finds it sent; a failure is kept on the row and tried again later.
 */
export async function sendMail({ id }: JobPayload): Promise<void> {
  transport ??= createTransport(env.SMTP_URL);
  const failure = await outsideShops(async (tx) => {
    const mail = await takeMail(tx, id);
    if (!mail) return null;
    try {
      await transport!.sendMail({
        from: env.MAIL_FROM,
        to: mail.to,
        replyTo: mail.replyTo ?? undefined,
        subject: mail.subject,
        text: mail.text,
        html: mail.html,
        // Stable across retries, so that a server that took it already can tell.
        messageId: `<${mail.id}@${new URL(env.APP_ORIGIN).hostname}>`,
      });
    } catch (fault) {
      await failMail(tx, id, fault instanceof Error ? fault.message : String(fault));
      return fault;
    }
    await finishMail(tx, id);
    return null;
  });
  if (failure) throw failure;
}
