import { findPerson, setPasswordHash } from "#app/data/people.server.ts";
import { chooseShop, endSession, findMemberships, listSessions } from "#app/data/sessions.server.ts";
import { inShop, outsideShops } from "#app/data/scope.server.ts";
import { housekeeper } from "#app/domain/viewer.ts";
import { allow } from "./rate-limit.server.ts";
import { hashPassword, passwordMatches } from "./secrets.server.ts";
import { givePresets } from "./shop-presets.server.ts";

export const shortestPassword = 12;

/** Why this can't be a password; null when it can. */
export function refusePassword(password: string, email: string): string | null {
  if (password.length < shortestPassword) return `Take at least ${shortestPassword} characters; a few words are easy to keep`;
  if (password.length > 200) return "Keep it within 200 characters";
  if (password.toLowerCase().includes(email.split("@")[0]!.toLowerCase())) return "Leave your address out of it";
  return new Set(password).size < 5 ? "Take more different characters" : null;
}

export type ChangePassword = { ok: true } | { ok: false; field: "current" | "next"; reason: string };

/** Sets a new password; whoever has one proves it first, and every other session of theirs ends. */
export async function changePassword(person: { personId: string; email: string; sessionId: string }, current: string, next: string): Promise<ChangePassword> {
  if (!(await allow("sign-in", `password:${person.personId}`))) return { ok: false, field: "current", reason: "Too many tries. Wait a quarter of an hour." };
  const stored = await outsideShops((tx) => findPerson(tx, person.personId));
  if (stored?.passwordHash && !(await passwordMatches(stored.passwordHash, current))) return { ok: false, field: "current", reason: "This is not your password" };
  const refusal = refusePassword(next, person.email);
  if (refusal) return { ok: false, field: "next", reason: refusal };
  const hash = await hashPassword(next);
  await outsideShops(async (tx) => {
    await setPasswordHash(tx, person.personId, hash);
    for (const { id } of await listSessions(tx, person.personId)) if (id !== person.sessionId) await endSession(tx, id, person.personId);
  });
  return { ok: true };
}

/** Ends one session of this person, or all but the one they sit at. */
export async function endSessions(person: { personId: string; sessionId: string }, which: string | "others"): Promise<void> {
  await outsideShops(async (tx) => {
    if (which !== "others") await endSession(tx, which, person.personId);
    else for (const { id } of await listSessions(tx, person.personId)) if (id !== person.sessionId) await endSession(tx, id, person.personId);
  });
}

/** Turns this session to another shop of the person. */
export async function switchShop(person: { personId: string; sessionId: string }, shopId: string): Promise<boolean> {
  return outsideShops(async (tx) => {
    if (!(await findMemberships(tx, person.personId)).some((one) => one.shopId === shopId)) return false;
    await chooseShop(tx, person.sessionId, shopId);
    return true;
  });
}

/** Founds a shop whose owner and designer this person is. */
export async function foundShop(person: { personId: string; sessionId: string }, name: string, currency: string): Promise<string> {
  const shopId = await outsideShops(async (tx) => {
    const { rows } = await tx.raw<{ rows: Array<{ id: string }> }>("select scope.found_shop(?, ?, ?) as id", [name, currency, person.personId]);
    await chooseShop(tx, person.sessionId, rows[0]!.id);
    return rows[0]!.id;
  });
  await inShop(housekeeper(shopId), (tx) => givePresets(tx, shopId));
  return shopId;
}
