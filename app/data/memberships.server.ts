import type { Role } from "#app/domain/permissions.ts";
import type { Tx } from "./scope.server.ts";

export interface Member {
  personId: string;
  name: string;
  email: string;
  roles: Role[];
  since: Date;
}

/** Everybody who belongs to the shop now, by name. */
export async function listMembers(tx: Tx): Promise<Member[]> {
  const rows = (await tx("memberships")
    .join("people", "people.id", "memberships.person_id")
    .whereNull("memberships.ended_at")
    .orderBy("people.name")
    .select("memberships.person_id", "people.name", "people.email", "memberships.roles", "memberships.created_at")) as Array<{ person_id: string; name: string; email: string; roles: Role[]; created_at: Date }>;
  return rows.map((row) => ({ personId: row.person_id, name: row.name, email: row.email, roles: row.roles, since: row.created_at }));
}

/** Makes this person a member with these roles; somebody who left comes back. */
export async function addMembership(tx: Tx, membership: { shopId: string; personId: string; roles: readonly Role[] }): Promise<void> {
  await tx("memberships")
    .insert({ shop_id: membership.shopId, person_id: membership.personId, roles: [...membership.roles] })
    .onConflict(["shop_id", "person_id"])
    .merge({ roles: [...membership.roles], ended_at: null });
}

export async function endMembership(tx: Tx, personId: string): Promise<void> {
  await tx("memberships").where({ person_id: personId }).update({ ended_at: tx.fn.now() });
}
