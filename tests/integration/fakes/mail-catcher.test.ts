import { mkdtemp, readFile, readdir, rm } from "node:fs/promises";
import http from "node:http";
import os from "node:os";
import path from "node:path";
import nodemailer, { type SendMailOptions } from "nodemailer";
import { afterEach, beforeEach, expect, test } from "vitest";
import { startMailCatcher, type MailCatcher } from "#scripts/fakes/mail-catcher.ts";

let dir: string;
let catcher: MailCatcher;

beforeEach(async () => {
  dir = await mkdtemp(path.join(os.tmpdir(), "mail-catcher-"));
  catcher = await startMailCatcher({ smtpPort: 0, webPort: 0, dir });
});

afterEach(async () => {
  await catcher.stop();
  await rm(dir, { recursive: true });
});

const send = (mail: SendMailOptions) => nodemailer.createTransport({ host: "127.0.0.1", port: catcher.smtpPort, auth: { user: "shop", pass: "any" } }).sendMail({ from: "Spotblue <spotblue@localhost>", ...mail });
const get = (place: string, init?: RequestInit) => fetch(catcher.url + place, init);

const signIn = {
  to: "Runa Aune <runa@aune.example>",
  bcc: "odile@keld.example",
  subject: "Zugang für <Runa>",
  text: "Open it: http://127.0.0.1:4600/sign-in/link/abc_DEF?next=%2F and be quick.",
  html: '<p>Hello <b>Runa</b></p><a href="http://127.0.0.1:4600/sign-in/link/abc_DEF?next=%2F&amp;x=1">Open</a><script>parent.document.title="taken"</script>',
  attachments: [{ filename: "sheet.pdf", content: Buffer.from("%PDF-1.7 not really") }],
};

test("a mail is caught with everything in it, and kept over a new start", async () => {
  await send(signIn);
  const { mails } = (await (await get("/api/mails")).json()) as { mails: unknown[] };
  expect(mails).toEqual([expect.objectContaining({
    from: "spotblue@localhost", to: ["runa@aune.example", "odile@keld.example"], subject: "Zugang für <Runa>",
    text: expect.stringContaining("be quick."),
    links: ["http://127.0.0.1:4600/sign-in/link/abc_DEF?next=%2F", "http://127.0.0.1:4600/sign-in/link/abc_DEF?next=%2F&x=1"],
    attachments: [{ name: "sheet.pdf", contentType: "application/pdf", bytes: 19 }],
  })]);
  const [source] = (await readdir(dir)).filter((name) => name.endsWith(".eml"));
  expect(await readFile(path.join(dir, source!), "utf8")).toContain("Runa Aune <runa@aune.example>");

  await catcher.stop();
  catcher = await startMailCatcher({ smtpPort: 0, webPort: 0, dir });
  expect(catcher.mails.newestFirst()).toEqual(mails);
});

test("the newest stands first, and a list can be for one address", async () => {
  await send({ to: "ines@keld.example", subject: "sent before" });
  await send({ to: "Odile@keld.example", subject: "sent after" });
  const page = await (await get("/")).text();
  expect(page.indexOf("sent after")).toBeGreaterThan(0);
  expect(page.indexOf("sent after")).toBeLessThan(page.indexOf("sent before"));
  const { mails } = (await (await get("/api/mails?to=odile@keld.example")).json()) as { mails: Array<{ subject: string }> };
  expect(mails.map(({ subject }) => subject)).toEqual(["sent after"]);
});

test("pages show text with links, and the mail's HTML where it can do nothing", async () => {
  await send(signIn);
  const [mail] = catcher.mails.newestFirst();
  const page = await (await get(`/mails/${mail!.id}`)).text();
  expect(page).toContain("Zugang für &#60;Runa&#62;");
  expect(page).toContain('<a href="http://127.0.0.1:4600/sign-in/link/abc_DEF?next=%2F">');
  expect(page).toMatch(/<iframe[^>]+sandbox="allow-popups allow-popups-to-escape-sandbox"/);
  expect(page).not.toContain("parent.document");
  const html = await get(`/mails/${mail!.id}/html`);
  expect(html.headers.get("content-security-policy")).toMatch(/default-src 'none'.*sandbox/);
  expect(await html.text()).toContain("<b>Runa</b>");
  expect((await get(`/mails/${mail!.id}/source`)).headers.get("content-type")).toBe("message/rfc822");
  expect((await get("/mails/..%2F..%2Fetc%2Fpasswd")).status).toBe(404);
});

test("a refused address is told to the sender, the others get theirs", async () => {
  const { accepted, rejected } = await send({ to: ["gone@refused.invalid", "ines@keld.example"], subject: "to two" });
  expect({ accepted, rejected }).toEqual({ accepted: ["ines@keld.example"], rejected: ["gone@refused.invalid"] });
  await expect(send({ to: "gone@refused.invalid", subject: "to one" })).rejects.toMatchObject({ responseCode: 550 });
});

test("waiting for a mail ends with it, or says what came instead", async () => {
  const waiting = catcher.mails.waitFor(({ subject }) => subject === "late");
  await send({ to: "ines@keld.example", subject: "late" });
  expect((await waiting).to).toEqual(["ines@keld.example"]);
  await expect(catcher.mails.waitFor(({ subject }) => subject === "never", 20)).rejects.toThrow(/the last is "late"/);
});

test("a page that gave its own name this machine's address reads nothing", async () => {
  const status = await new Promise<number | undefined>((resolve, reject) => {
    http.get({ host: "127.0.0.1", port: catcher.webPort, path: "/api/mails", headers: { host: "evil.example" } }, (answer) => resolve(answer.resume().statusCode)).on("error", reject);
  });
  expect(status).toBe(403);
});

test("clearing takes pages and files", async () => {
  await send({ to: "ines@keld.example", subject: "one" });
  await get("/api/mails", { method: "DELETE" });
  expect(await readdir(dir)).toEqual([]);
  expect(catcher.mails.newestFirst()).toEqual([]);
});
