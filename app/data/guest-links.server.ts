import type { Tx } from "./scope.server.ts";

export interface GuestLink {
  id: string;
  jobId: string;
  role: "customer" | "machinist";
  name: string;
  email: string;
  createdAt: Date;
  expiresAt: Date;
  /** When its button was pressed; a link opens one device. */
  exchangedAt: Date | null;
  endedAt: Date | null;
}

interface GuestLinkRow {
  id: string;
  job_id: string;
  role: "customer" | "machinist";
  name: string;
  email: string;
  created_at: Date;
  expires_at: Date;
  exchanged_at: Date | null;
  ended_at: Date | null;
}

const toGuestLink = (row: GuestLinkRow): GuestLink => ({
  id: row.id,
  jobId: row.job_id,
  role: row.role,
  name: row.name,
  email: row.email,
  createdAt: row.created_at,
  expiresAt: row.expires_at,
  exchangedAt: row.exchanged_at,
  endedAt: row.ended_at,
});

export async function listGuestLinks(tx: Tx, jobId: string): Promise<GuestLink[]> {
  return ((await tx("guest_links").where({ job_id: jobId }).orderBy("created_at", "desc")) as GuestLinkRow[]).map(toGuestLink);
}

export async function addGuestLink(tx: Tx, link: { shopId: string; jobId: string; role: "customer" | "machinist"; name: string; email: string; tokenHash: Buffer; createdBy: string | null; expiresAt: Date }): Promise<string> {
  const [row] = await tx("guest_links")
    .insert({ shop_id: link.shopId, job_id: link.jobId, role: link.role, name: link.name, email: link.email, token_hash: link.tokenHash, created_by: link.createdBy, expires_at: link.expiresAt })
    .returning("id");
  return row.id as string;
}

/** The shop in which this link lies; the link itself is then read in that shop's scope. */
export async function findShopOfGuestLink(tx: Tx, tokenHash: Buffer): Promise<string | null> {
  const { rows } = await tx.raw<{ rows: Array<{ shop: string | null }> }>("select scope.guest_link_shop(?) as shop", [tokenHash]);
  return rows[0]?.shop ?? null;
}

export async function findGuestLinkByToken(tx: Tx, tokenHash: Buffer): Promise<GuestLink | undefined> {
  const row = (await tx("guest_links").where({ token_hash: tokenHash }).first()) as GuestLinkRow | undefined;
  return row && toGuestLink(row);
}

/** Marks a link exchanged, if it still can be. Of two presses at once one gets it. */
export async function takeGuestLink(tx: Tx, id: string): Promise<boolean> {
  return (await tx("guest_links").where({ id }).whereNull("exchanged_at").whereNull("ended_at").where("expires_at", ">", tx.fn.now()).update({ exchanged_at: tx.fn.now() })) === 1;
}

export async function endGuestLink(tx: Tx, jobId: string, id: string): Promise<boolean> {
  return (await tx("guest_links").where({ id, job_id: jobId }).whereNull("ended_at").update({ ended_at: tx.fn.now() })) === 1;
}

/** Machinists with an account, and whether this job is shared with them. */
export async function listMachinists(tx: Tx, jobId: string): Promise<Array<{ personId: string; name: string; email: string; shared: boolean }>> {
  const rows = (await tx("memberships as m")
    .join("people as p", "p.id", "m.person_id")
    .leftJoin("job_shares as s", (join) => void join.on("s.person_id", "m.person_id").andOnVal("s.job_id", jobId))
    .whereRaw("'machinist' = any (m.roles)")
    .whereNull("m.ended_at")
    .orderBy("p.name")
    .select("m.person_id", "p.name", "p.email", tx.raw("s.job_id is not null as shared"))) as Array<{ person_id: string; name: string; email: string; shared: boolean }>;
  return rows.map((row) => ({ personId: row.person_id, name: row.name, email: row.email, shared: row.shared }));
}

export async function shareJob(tx: Tx, share: { shopId: string; jobId: string; personId: string }, shared: boolean): Promise<void> {
  if (shared) await tx("job_shares").insert({ shop_id: share.shopId, job_id: share.jobId, person_id: share.personId }).onConflict().ignore();
  else await tx("job_shares").where({ job_id: share.jobId, person_id: share.personId }).delete();
}
