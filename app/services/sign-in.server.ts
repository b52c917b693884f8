import { inShop, outsideShops } from "#app/data/scope.server.ts";
import { addSignInLink, takeSignInLink } from "#app/data/sign-in-links.server.ts";
import { findPerson, findPersonByEmail, type Person } from "#app/data/people.server.ts";
import { findMemberships, openSession, proveSession, type ProofWay } from "#app/data/sessions.server.ts";
import { writeLog } from "#app/data/logbook.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";
import { queueMail } from "./mail.server.ts";
import { allow, countFailure, mayTry } from "./rate-limit.server.ts";
import { hashToken, newToken, passwordMatches } from "./secrets.server.ts";

const days = 24 * 60 * 60 * 1000;
const absoluteLife = 7 * days;
const ownerLife = days / 2;
const linkLife = 15 * 60 * 1000;

export type SignInRefusal = "wrong" | "too-many";

export type SignInResult = { ok: true; token: string; expiresAt: Date } | { ok: false; reason: SignInRefusal };

/** Signs in by password. Ten failures in a quarter of an hour, by account or by address, close the door for a while. */
export async function signInWithPassword(input: { email: string; password: string; address: string; userAgent: string }): Promise<SignInResult> {
  const account = `account:${input.email.trim().toLowerCase()}`;
  const allowed = (await mayTry("sign-in", account)) && (await mayTry("sign-in-address", input.address));
  if (!allowed) return { ok: false, reason: "too-many" };
  const person = await outsideShops((tx) => findPersonByEmail(tx, input.email));
  const matches = await passwordMatches(person && !person.disabled ? person.passwordHash : null, input.password);
  if (!person || !matches) {
    await countFailure("sign-in", account);
    await countFailure("sign-in-address", input.address);
    return { ok: false, reason: "wrong" };
  }
  return startSession(person, input.userAgent, "password");
}

/** Opens a session of this person; owners of a shop stay signed in for a shorter time. */
export async function startSession(person: Pick<Person, "id" | "name">, userAgent: string, way: ProofWay): Promise<SignInResult & { ok: true }> {
  const { token, tokenHash } = newToken();
  const { memberships, expiresAt } = await outsideShops(async (tx) => {
    const memberships = await findMemberships(tx, person.id);
    const life = memberships.some((m) => m.roles.includes("owner")) ? ownerLife : absoluteLife;
    const expiresAt = new Date(Date.now() + life);
    await openSession(tx, { tokenHash, personId: person.id, guestLinkId: null, shopId: memberships[0]?.shopId ?? null, expiresAt, userAgent, way });
    return { memberships, expiresAt };
  });
  const shop = memberships[0];
  if (shop) {
    await inShop(housekeeper(shop.shopId), (tx) =>
      writeLog(tx, { shopId: shop.shopId, actorId: person.id, actor: person.name, action: "signed in", subjectType: "person", subjectId: person.id, detail: { way } }),
    );
  }
  return { ok: true, token, expiresAt };
}

/** Mails a one-time link, if there is such a person; the answer to the asker is the same either way. */
export async function requestSignInLink(input: { email: string; address: string; next: string }): Promise<{ ok: boolean }> {
  const allowed = (await allow("link", `account:${input.email.trim().toLowerCase()}`)) && (await allow("link", `address:${input.address}`));
  if (!allowed) return { ok: false };
  await outsideShops(async (tx) => {
    const person = await findPersonByEmail(tx, input.email);
    if (!person || person.disabled) return;
    const { token, tokenHash } = newToken();
    const linkId = await addSignInLink(tx, { tokenHash, personId: person.id, purpose: "sign-in", sessionId: null, expiresAt: new Date(Date.now() + linkLife) });
    const url = `${env.APP_ORIGIN}/sign-in/link/${token}?next=${encodeURIComponent(input.next)}`;
    await queueMail(tx, {
      shopId: null,
      onceKey: `sign-in-link:${linkId}`,
      to: person.email,
      subject: "Your link to sign in",
      paragraphs: ["You asked for a link to sign in to Spotblue. It works once, for 15 minutes.", "If it was not you, leave it: nothing happens without it."],
      action: { label: "Sign in", url },
    });
  });
  return { ok: true };
}

/** Takes a one-time link, once, and signs its person in. */
export async function signInWithLink(token: string, userAgent: string): Promise<SignInResult> {
  const person = await outsideShops(async (tx) => {
    const link = await takeSignInLink(tx, hashToken(token), "sign-in");
    return link && findPerson(tx, link.personId);
  });
  if (!person || person.disabled) return { ok: false, reason: "wrong" };
  return startSession(person, userAgent, "e-mailed code");
}

/** Proves again who is at the keyboard, before a signature. */
export async function proveWithPassword(input: { personId: string; sessionId: string; password: string }): Promise<{ ok: true } | { ok: false; reason: SignInRefusal }> {
  const key = `prove:${input.personId}`;
  if (!(await mayTry("sign-in", key))) return { ok: false, reason: "too-many" };
  const person = await outsideShops((tx) => findPerson(tx, input.personId));
  if (!person || !(await passwordMatches(person.passwordHash, input.password))) {
    await countFailure("sign-in", key);
    return { ok: false, reason: "wrong" };
  }
  await outsideShops((tx) => proveSession(tx, input.sessionId, "password"));
  return { ok: true };
}

/** Mails a link that proves who is at the keyboard of this session. */
export async function sendProofLink(input: { personId: string; sessionId: string; next: string }): Promise<boolean> {
  if (!(await allow("link", `prove:${input.personId}`))) return false;
  await outsideShops(async (tx) => {
    const person = await findPerson(tx, input.personId);
    if (!person || person.disabled) return;
    const { token, tokenHash } = newToken();
    const linkId = await addSignInLink(tx, { tokenHash, personId: person.id, purpose: "prove", sessionId: input.sessionId, expiresAt: new Date(Date.now() + linkLife) });
    await queueMail(tx, {
      shopId: null,
      onceKey: `prove-link:${linkId}`,
      to: person.email,
      subject: "Prove that it is you, to sign",
      paragraphs: ["You are about to sign a decision in Spotblue. This link proves that it is you. It works once, for 15 minutes.", "If it was not you, tell the shop: somebody sits at your session."],
      action: { label: "It is me", url: `${env.APP_ORIGIN}/prove/link/${token}?next=${encodeURIComponent(input.next)}` },
    });
  });
  return true;
}

/** Takes such a link, once; it proves the session that asked for it, and no other. */
export async function proveWithLink(token: string, sessionId: string): Promise<boolean> {
  return outsideShops(async (tx) => {
    const link = await takeSignInLink(tx, hashToken(token), "prove");
    if (!link || link.sessionId !== sessionId) return false;
    await proveSession(tx, sessionId, "e-mailed code");
    return true;
  });
}
