import http from "node:http";
import type { AddressInfo } from "node:net";
import { buffer } from "node:stream/consumers";
import { SMTPServer } from "smtp-server";
import { openMails, type CaughtMails } from "./caught-mails.ts";
import { answerAboutMails } from "./mail-pages.ts";

export interface MailCatcherSettings {
  /** 0 takes any. */
  smtpPort: number;
  webPort: number;
  dir: string;
}

export interface MailCatcher {
  smtpPort: number;
  webPort: number;
  /** Page to read what was caught. */
  url: string;
  mails: CaughtMails;
  stop: () => Promise<void>;
}

const LARGEST_MAIL = 50 * 1024 * 1024;
/** Mail to this domain is refused for good, as to an address that is gone (RFC 2606 keeps `.invalid` free). */
const REFUSED_DOMAIN = "@refused.invalid";
const LOOPBACK = "127.0.0.1";

/** Takes every mail that is sent to it, passes none on, and shows them on a page. */
export async function startMailCatcher(settings: MailCatcherSettings): Promise<MailCatcher> {
  const mails = await openMails(settings.dir);
  const smtp = new SMTPServer({
    banner: "mail catcher of the local stack",
    authOptional: true,
    disabledCommands: ["STARTTLS"],
    // Any name and password will do: a setting that has some must work here too.
    allowInsecureAuth: true,
    onAuth: (auth, _session, done) => done(null, { user: auth.username ?? "anybody" }),
    disableReverseLookup: true,
    size: LARGEST_MAIL,
    onRcptTo: ({ address }, _session, done) =>
      done(address.toLowerCase().endsWith(REFUSED_DOMAIN) ? Object.assign(new Error(`${address} takes no mail`), { responseCode: 550 }) : null),
    onData: (stream, session, done) => {
      buffer(stream)
        .then(async (source) => {
          if (stream.sizeExceeded) throw Object.assign(new Error("the mail is too large"), { responseCode: 552 });
          const { mailFrom, rcptTo } = session.envelope;
          await mails.add(source, { from: mailFrom ? mailFrom.address : "", to: rcptTo.map(({ address }) => address) });
        })
        .then(() => done(), (error: Error) => done(error));
    },
  });
  // A client that hangs up in the middle is no fault of ours.
  smtp.on("error", () => undefined);
  const web = http.createServer((request, response) => {
    answerAboutMails(mails, request, response).catch(() => response.destroy());
  });
  const smtpPort = await listenOn(smtp.server, settings.smtpPort);
  const webPort = await listenOn(web, settings.webPort).catch(async (error: unknown) => {
    await new Promise<void>((resolve) => smtp.close(resolve));
    throw error;
  });

  return {
    smtpPort,
    webPort,
    url: `http://${LOOPBACK}:${webPort}`,
    mails,
    async stop() {
      web.closeAllConnections();
      await Promise.all([new Promise<void>((resolve) => smtp.close(resolve)), new Promise<void>((resolve) => void web.close(() => resolve()))]);
    },
  };
}

async function listenOn(server: import("node:net").Server, port: number): Promise<number> {
  await new Promise<void>((resolve, reject) => {
    server.once("error", reject);
    server.listen(port, LOOPBACK, resolve);
  });
  return (server.address() as AddressInfo).port;
}
