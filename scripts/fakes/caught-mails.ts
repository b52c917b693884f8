import { randomBytes } from "node:crypto";
import fs from "node:fs/promises";
import path from "node:path";
import { simpleParser } from "mailparser";

export interface CaughtMail {
  id: string;
  /** When it came, ISO 8601 in UTC. */
  at: string;
  from: string;
  /** Who the sender gave to the server, blind copies included. */
  to: string[];
  subject: string;
  text: string;
  html: string;
  /** Addresses of web pages in text and HTML, each once. */
  links: string[];
  attachments: Array<{ name: string; contentType: string; bytes: number }>;
}

/** Older ones are deleted. */
const MOST_KEPT = 2_000;
const LINK = /https?:\/\/[^\s<>"')\]]+/g;

export type CaughtMails = Awaited<ReturnType<typeof openMails>>;

/** Mails in a folder, each as it came (`.eml`) and as it reads (`.json`). */
export async function openMails(dir: string) {
  await fs.mkdir(dir, { recursive: true });
  const mails: CaughtMail[] = [];
  for (const name of (await fs.readdir(dir)).filter((name) => name.endsWith(".json")).sort()) {
    mails.push(JSON.parse(await fs.readFile(path.join(dir, name), "utf8")) as CaughtMail);
  }
  const waiting = new Set<() => void>();
  const fileOf = (id: string, ending: string) => path.join(dir, `${id}.${ending}`);

  async function forget(mail: CaughtMail): Promise<void> {
    for (const ending of ["json", "eml"]) await fs.rm(fileOf(mail.id, ending), { force: true });
  }

  return {
    newestFirst: () => mails.toReversed(),
    find: (id: string) => mails.find((mail) => mail.id === id),
    source: (mail: CaughtMail) => fs.readFile(fileOf(mail.id, "eml")),

    async add(source: Buffer, envelope: { from: string; to: string[] }): Promise<CaughtMail> {
      const parsed = await simpleParser(source, { skipImageLinks: true });
      const at = new Date().toISOString();
      const html = parsed.html || "";
      const text = parsed.text ?? "";
      const hrefs = [...html.matchAll(/href="(https?:[^"]+)"/g)].map(([, href]) => href!.replaceAll("&amp;", "&"));
      const mail: CaughtMail = {
        id: `${at.replace(/[:.]/g, "-")}-${randomBytes(4).toString("hex")}`,
        at, ...envelope, subject: parsed.subject ?? "", text, html,
        links: [...new Set([...(text.match(LINK) ?? []), ...hrefs])],
        attachments: parsed.attachments.map(({ filename, contentType, size }) => ({ name: filename ?? "", contentType, bytes: size })),
      };
      await fs.writeFile(fileOf(mail.id, "eml"), source);
      // Whole or not at all, so that a start never meets half of one.
      await fs.writeFile(fileOf(mail.id, "new"), JSON.stringify(mail, undefined, 2));
      await fs.rename(fileOf(mail.id, "new"), fileOf(mail.id, "json"));
      mails.push(mail);
      while (mails.length > MOST_KEPT) await forget(mails.shift()!);
      for (const look of waiting) look();
      return mail;
    },

    async clear(): Promise<void> {
      for (const mail of mails.splice(0)) await forget(mail);
    },

    /** The newest mail that is meant, now or within so many milliseconds; rejects when none came. */
    waitFor(isMeant: (mail: CaughtMail) => boolean, patienceMs = 10_000): Promise<CaughtMail> {
      return new Promise((resolve, reject) => {
        const look = () => {
          const found = mails.findLast(isMeant);
          if (!found) return;
          waiting.delete(look);
          clearTimeout(patience);
          resolve(found);
        };
        const patience = setTimeout(() => {
          waiting.delete(look);
          reject(new Error(`no such mail came within ${patienceMs} ms; of ${mails.length}, the last is "${mails.at(-1)?.subject ?? ""}"`));
        }, patienceMs);
        waiting.add(look);
        look();
      });
    },
  };
}
