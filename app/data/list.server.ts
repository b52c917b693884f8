import type { Knex } from "knex";

/** What a table shows, as its URL says it: `?q=…&sort=-due&page=2`. */
export interface ListQuery {
  q: string;
  sort: { key: string; descending: boolean } | null;
  page: number;
  /** Rows that were set aside are shown too. */
  withSetAside?: boolean;
}

export interface ListPage<Row> {
  rows: Row[];
  total: number;
  page: number;
  pages: number;
}

export const pageSize = 25;

/**
 * One page of a query, with the count of all its rows, in one round trip.
 *
 * @param query selects its columns; columns that sort or are searched are named in full
 * @param sortColumns sort key to column
 * @param searched columns in which `q` is looked for
 * @param all true gives every row, for CSV
 */
export async function listPage<Row>(
  query: Knex.QueryBuilder,
  list: ListQuery,
  { sortColumns, searched, tieBreak, all = false }: { sortColumns: Record<string, string>; searched: string[]; tieBreak: string; all?: boolean },
): Promise<ListPage<Row>> {
  if (list.q) {
    const pattern = `%${list.q.replace(/[\\%_]/g, (c) => `\\${c}`)}%`;
    void query.where((either) => {
      for (const column of searched) void either.orWhereILike(column, pattern);
    });
  }
  const column = list.sort && sortColumns[list.sort.key];
  if (list.sort && column) void query.orderBy(column, list.sort.descending ? "desc" : "asc", "last");
  void query.orderBy(tieBreak);
  void query.select(query.client.raw("count(*) over ()::integer as total_rows"));
  if (!all) void query.limit(pageSize).offset((list.page - 1) * pageSize);
  const rows = (await query) as Array<Row & { total_rows: number }>;
  let total = rows[0]?.total_rows ?? 0;
  if (rows.length === 0 && list.page > 1) {
    // Past the end: the window count has no row to stand on.
    const counted = await query.clone().clear("limit").clear("offset").limit(1);
    total = (counted[0] as { total_rows: number } | undefined)?.total_rows ?? 0;
  }
  return { rows, total, page: list.page, pages: Math.max(1, Math.ceil(total / pageSize)) };
}
