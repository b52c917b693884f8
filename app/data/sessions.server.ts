import type { Role } from "#app/domain/permissions.ts";
import type { Tx } from "./scope.server.ts";

export interface Membership {
  shopId: string;
  shopName: string;
  roles: Role[];
}

export type ProofWay = "password" | "e-mailed code" | "GitHub" | "guest link";

export interface FoundSession {
  id: string;
  personId: string | null;
  guestLinkId: string | null;
  shopId: string | null;
  lastSeenAt: Date;
  provedAt: Date;
  provedBy: ProofWay;
  person: { name: string; email: string; disabled: boolean } | null;
  memberships: Membership[];
}

interface SessionRow {
  id: string;
  person_id: string | null;
  guest_link_id: string | null;
  shop_id: string | null;
  last_seen_at: Date;
  proved_at: Date;
  proved_by: ProofWay;
  name: string | null;
  email: string | null;
  disabled_at: Date | null;
  memberships: Array<{ shop_id: string; shop_name: string; roles: Role[] }> | null;
}

/** The session of this token with its person and memberships, in one query. */
export async function findSession(tx: Tx, tokenHash: Buffer): Promise<FoundSession | undefined> {
  const { rows } = await tx.raw<{ rows: SessionRow[] }>(
    `select s.id, s.person_id, s.guest_link_id, s.shop_id, s.last_seen_at, s.proved_at, s.proved_by, p.name, p.email, p.disabled_at,
       (select json_agg(m) from scope.memberships_of(s.person_id) m) as memberships
     from scope.find_session(?) s left join people p on p.id = s.person_id`,
    [tokenHash],
  );
  const row = rows[0];
  if (!row) return undefined;
  return {
    id: row.id,
    personId: row.person_id,
    guestLinkId: row.guest_link_id,
    shopId: row.shop_id,
    lastSeenAt: row.last_seen_at,
    provedAt: row.proved_at,
    provedBy: row.proved_by,
    person: row.name === null || row.email === null ? null : { name: row.name, email: row.email, disabled: row.disabled_at !== null },
    memberships: (row.memberships ?? []).map((m) => ({ shopId: m.shop_id, shopName: m.shop_name, roles: m.roles })),
  };
}

export interface NewSession {
  tokenHash: Buffer;
  personId: string | null;
  guestLinkId: string | null;
  shopId: string | null;
  expiresAt: Date;
  userAgent: string;
  way: ProofWay;
}

export async function openSession(tx: Tx, session: NewSession): Promise<string> {
  const { rows } = await tx.raw<{ rows: Array<{ id: string }> }>("select scope.open_session(?, ?, ?, ?, ?, ?, ?) as id", [
    session.tokenHash,
    session.personId,
    session.guestLinkId,
    session.shopId,
    session.expiresAt,
    session.userAgent.slice(0, 300),
    session.way,
  ]);
  return rows[0]!.id;
}

export async function touchSession(tx: Tx, sessionId: string): Promise<void> {
  await tx.raw("select scope.touch_session(?)", [sessionId]);
}

export async function proveSession(tx: Tx, sessionId: string, way: ProofWay): Promise<void> {
  await tx.raw("select scope.prove_session(?, ?)", [sessionId, way]);
}

export async function chooseShop(tx: Tx, sessionId: string, shopId: string): Promise<void> {
  await tx.raw("select scope.choose_shop(?, ?)", [sessionId, shopId]);
}

/** Ends a session; with a person, only if it is theirs. Says whether there was one. */
export async function endSession(tx: Tx, sessionId: string, personId: string | null): Promise<boolean> {
  const { rows } = await tx.raw<{ rows: Array<{ ended: number }> }>("select scope.end_session(?, ?) as ended", [sessionId, personId]);
  return rows[0]!.ended > 0;
}

export async function endGuestSessions(tx: Tx, guestLinkId: string): Promise<void> {
  await tx.raw("select scope.end_guest_sessions(?)", [guestLinkId]);
}

export interface ListedSession {
  id: string;
  createdAt: Date;
  lastSeenAt: Date;
  expiresAt: Date;
  userAgent: string;
}

export async function listSessions(tx: Tx, personId: string): Promise<ListedSession[]> {
  const { rows } = await tx.raw<{ rows: Array<{ id: string; created_at: Date; last_seen_at: Date; expires_at: Date; user_agent: string }> }>(
    "select id, created_at, last_seen_at, expires_at, user_agent from scope.sessions_of(?)",
    [personId],
  );
  return rows.map((row) => ({ id: row.id, createdAt: row.created_at, lastSeenAt: row.last_seen_at, expiresAt: row.expires_at, userAgent: row.user_agent }));
}

export async function findMemberships(tx: Tx, personId: string): Promise<Membership[]> {
  const { rows } = await tx.raw<{ rows: Array<{ shop_id: string; shop_name: string; roles: Role[] }> }>("select * from scope.memberships_of(?)", [personId]);
  return rows.map((row) => ({ shopId: row.shop_id, shopName: row.shop_name, roles: row.roles }));
}

/** The jobs that somebody kept to jobs may see in this shop. */
export async function listJobsOf(tx: Tx, shopId: string, personId: string, held: readonly Role[]): Promise<string[]> {
  const { rows } = await tx.raw<{ rows: Array<{ ids: string[] }> }>("select scope.jobs_of(?, ?, ?::text[]) as ids", [shopId, personId, [...held]]);
  return rows[0]!.ids;
}

export interface OpenGuestLink {
  id: string;
  shopId: string;
  shopName: string;
  jobId: string;
  role: "customer" | "machinist";
  name: string;
  email: string;
}

/** A guest link that was not ended, with its shop's name. */
export async function findGuestLink(tx: Tx, guestLinkId: string): Promise<OpenGuestLink | undefined> {
  const { rows } = await tx.raw<{ rows: Array<{ id: string; shop_id: string; shop_name: string; job_id: string; role: "customer" | "machinist"; name: string; email: string }> }>(
    "select g.id, g.shop_id, scope.shop_name(g.shop_id) as shop_name, g.job_id, g.role, g.name, g.email from scope.guest_link(?) g",
    [guestLinkId],
  );
  const row = rows[0];
  return row && { id: row.id, shopId: row.shop_id, shopName: row.shop_name, jobId: row.job_id, role: row.role, name: row.name, email: row.email };
}
