import { addMembership } from "#app/data/memberships.server.ts";
import { addPerson, findPersonByEmail } from "#app/data/people.server.ts";
import { inShop, outsideShops } from "#app/data/scope.server.ts";
import { findMemberships, listJobsOf } from "#app/data/sessions.server.ts";
import { isKeptToJobs, type Role } from "#app/domain/permissions.ts";
import { housekeeper, type Viewer } from "#app/domain/viewer.ts";
import { hashPassword } from "#app/services/secrets.server.ts";
import { givePresets } from "#app/services/shop-presets.server.ts";
import signIns from "./demo-sign-ins.json" with { type: "json" };

export const demoShopName = "Keld Motor Works";

/** The people of the demo by role, as the viewers they are when signed in. */
export type DemoPeople = Record<Role, Viewer>;

/** The demo shop and its four people; made once, found again afterwards. */
export async function seedPeople(): Promise<DemoPeople> {
  const ids = new Map<string, string>();
  for (const person of signIns) {
    const passwordHash = await hashPassword(person.password);
    const id = await outsideShops(async (tx) => {
      const known = await findPersonByEmail(tx, person.email);
      return known?.id ?? addPerson(tx, { name: person.name, email: person.email, passwordHash });
    });
    ids.set(person.role, id);
  }
  const shopId = await outsideShops(async (tx) => {
    const [membership] = await findMemberships(tx, ids.get("owner")!);
    if (membership) return membership.shopId;
    const { rows } = await tx.raw<{ rows: Array<{ id: string }> }>("select scope.found_shop(?, 'EUR', ?) as id", [demoShopName, ids.get("owner")!]);
    return rows[0]!.id;
  });
  await inShop(housekeeper(shopId), async (tx) => {
    await givePresets(tx, shopId);
    await addMembership(tx, { shopId, personId: ids.get("owner")!, roles: ["owner"] });
    for (const role of ["designer", "machinist", "customer"] as const) await addMembership(tx, { shopId, personId: ids.get(role)!, roles: [role] });
  });
  return { owner: await viewerOf("owner", shopId), designer: await viewerOf("designer", shopId), machinist: await viewerOf("machinist", shopId), customer: await viewerOf("customer", shopId) };
}

/** This person of the demo as they are when signed in now. */
export async function viewerOf(role: Role, shopId: string): Promise<Viewer> {
  const listed = signIns.find((one) => one.role === role)!;
  return outsideShops(async (tx) => {
    const person = (await findPersonByEmail(tx, listed.email))!;
    const jobs = isKeptToJobs([role]) ? await listJobsOf(tx, shopId, person.id, [role]) : "*";
    return { personId: person.id, guestLinkId: null, name: person.name, email: person.email, shopId, shopName: demoShopName, roles: [role], jobs, sessionId: null, provedAt: null, provedBy: null };
  });
}
