import type { Knex } from "knex";

/** How far a tenant table is opened to the role the app connects with. */
export interface Protection {
  /** The table has a job_id, and who is kept to some jobs sees only theirs. */
  byJob?: boolean;
  /** Shop-wide rows that people kept to jobs may read too (the shop's name, its materials). */
  openInShop?: boolean;
  /** Rows are added and never changed. */
  appendOnly?: boolean;
}

/**
 * Puts a tenant table under row-level security: the app's role sees the rows of the shop
 * that its transaction named (`inShop`), and none without. FORCE holds for the owner too,
 * who gets a policy of its own, so that SECURITY DEFINER functions can look across shops.
 */
export async function protect(knex: Knex, table: string, { byJob = false, openInShop = false, appendOnly = false }: Protection = {}): Promise<void> {
  const shopColumn = table === "shops" ? "id" : "shop_id";
  const sameShop = `${shopColumn} = scope.shop_id()`;
  const visible = byJob ? `${sameShop} and scope.sees_job(job_id)` : openInShop ? sameShop : `${sameShop} and scope.sees_all_jobs()`;
  const verbs = appendOnly ? "select, insert" : "select, insert, update, delete";
  await knex.raw(`
    alter table ${table} enable row level security;
    alter table ${table} force row level security;
    create policy in_shop on ${table} to public using (${visible}) with check (${visible});
    create policy by_owner on ${table} to current_user using (true) with check (true);
    grant ${verbs} on ${table} to spotblue_app;
  `);
}

/** Tables whose rows carry a revision_id, and that a release seals. */
export async function seal(knex: Knex, table: string): Promise<void> {
  await knex.raw(`
    create trigger ${table}_sealed before insert or update or delete on ${table}
      for each row execute function scope.refuse_when_sealed();
    create trigger ${table}_no_truncate before truncate on ${table}
      for each statement execute function scope.refuse_truncate();
  `);
}
