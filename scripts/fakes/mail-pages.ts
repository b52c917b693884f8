import type { IncomingMessage, ServerResponse } from "node:http";
import type { CaughtMail, CaughtMails } from "./caught-mails.ts";
import { escapeHtml, isForLoopback, page, sendJson, sendPage } from "./loopback-page.ts";

/** The mail's own HTML may show what it carries, open links in a new window, and nothing else. */
const MAIL_POLICY = "default-src 'none'; img-src data:; style-src 'unsafe-inline'; base-uri 'none'; sandbox allow-popups allow-popups-to-escape-sandbox";

/** Pages to read what was caught, and the same as JSON at /api/mails. */
export async function answerAboutMails(mails: CaughtMails, request: IncomingMessage, response: ServerResponse): Promise<void> {
  if (!isForLoopback(request)) return sendJson(response, 403, { error: "Only by an address of this machine." });
  const { pathname, searchParams } = new URL(request.url ?? "/", "http://localhost");
  if (pathname === "/api/mails" && request.method === "DELETE") {
    await mails.clear();
    return sendJson(response, 200, { mails: [] });
  }
  if (request.method !== "GET" && request.method !== "HEAD") return sendJson(response, 405, { error: "Read only." });
  if (pathname === "/") return sendPage(response, 200, listPage(mails.newestFirst()));
  if (pathname === "/api/mails") {
    const to = searchParams.get("to")?.toLowerCase();
    return sendJson(response, 200, { mails: mails.newestFirst().filter((mail) => to === undefined || mail.to.some((address) => address.toLowerCase() === to)) });
  }
  const [, id = "", part] = /^\/mails\/([\w-]+)(?:\/(html|source))?$/.exec(pathname) ?? [];
  const mail = mails.find(id);
  if (!mail) return sendPage(response, 404, page("No such mail", `<h1>There is no such mail</h1><p><a href="/">All mails</a></p>`));
  if (part === "html") return sendPage(response, 200, `<base target="_blank">${mail.html}`, MAIL_POLICY);
  if (part === "source") {
    response.writeHead(200, { "Content-Type": "message/rfc822", "Content-Disposition": `attachment; filename="${mail.id}.eml"`, "X-Content-Type-Options": "nosniff" }).end(await mails.source(mail));
    return;
  }
  sendPage(response, 200, mailPage(mail));
}

function listPage(mails: readonly CaughtMail[]): string {
  const rows = mails.map((mail) => `<tr><td><a href="/mails/${mail.id}">${escapeHtml(mail.subject || "(no subject)")}</a></td><td>${escapeHtml(mail.to.join(", "))}</td><td><time datetime="${mail.at}">${inWords(mail.at)}</time></td></tr>`);
  const table = `<table><caption hidden>Caught mails, newest first</caption><thead><tr><th scope="col">Subject</th><th scope="col">To</th><th scope="col">Came (UTC)</th></tr></thead><tbody>${rows.join("")}</tbody></table>`;
  return page("Caught mails", `<h1>Mails that the shop sent</h1><p class="soft">They were caught on this machine and reached nobody. <a href="/">Look again</a></p>${mails.length > 0 ? table : "<p>None came yet.</p>"}`);
}

function mailPage(mail: CaughtMail): string {
  const attachments = mail.attachments.map(({ name, contentType, bytes }) => `${name || "unnamed"} (${contentType}, ${bytes} bytes)`).join(", ");
  const facts = [["From", mail.from], ["To", mail.to.join(", ")], ["Came", `${inWords(mail.at)} UTC`], ...(attachments ? [["Attached", attachments]] : [])];
  const html = mail.html ? `<h2>As it looks</h2><iframe title="The mail as it looks" src="/mails/${mail.id}/html" sandbox="allow-popups allow-popups-to-escape-sandbox"></iframe>` : "";
  return page(mail.subject, `<p><a href="/">All mails</a></p><h1>${escapeHtml(mail.subject || "(no subject)")}</h1><dl>${facts.map(([name, value]) => `<dt>${name}</dt><dd>${escapeHtml(value!)}</dd>`).join("")}</dl><pre>${withLinks(mail.text)}</pre>${html}<p><a href="/mails/${mail.id}/source">Source (.eml)</a></p>`);
}

const inWords = (at: string) => at.slice(0, 19).replace("T", " ");

function withLinks(text: string): string {
  return text.split(/(https?:\/\/[^\s<>"')\]]+)/).map((piece, i) => (i % 2 === 1 ? `<a href="${escapeHtml(piece)}">${escapeHtml(piece)}</a>` : escapeHtml(piece))).join("");
}
