import type { Tx } from "./scope.server.ts";

export type LinkPurpose = "sign-in" | "prove";

export async function addSignInLink(
  tx: Tx,
  link: { tokenHash: Buffer; personId: string; purpose: LinkPurpose; sessionId: string | null; expiresAt: Date },
): Promise<string> {
  const [row] = await tx("sign_in_links")
    .insert({ token_hash: link.tokenHash, person_id: link.personId, purpose: link.purpose, session_id: link.sessionId, expires_at: link.expiresAt })
    .returning("id");
  return row.id as string;
}

/** Marks a link used and gives it, if it was there, unused and in time. Of two takers at once one gets it. */
export async function takeSignInLink(tx: Tx, tokenHash: Buffer, purpose: LinkPurpose): Promise<{ personId: string; sessionId: string | null } | undefined> {
  const [row] = await tx("sign_in_links")
    .where({ token_hash: tokenHash, purpose })
    .whereNull("used_at")
    .where("expires_at", ">", tx.fn.now())
    .update({ used_at: tx.fn.now() })
    .returning(["person_id", "session_id"]);
  return row && { personId: row.person_id as string, sessionId: row.session_id as string | null };
}
