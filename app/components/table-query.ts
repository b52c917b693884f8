/** How a table is asked for in its URL: `?sort=-due&q=flange&page=2`. */
export interface TableQuery {
  sort: { key: string; descending: boolean } | null;
  q: string;
  /** From 1. */
  page: number;
}

/**
 * Reads a table's question from the URL, the same in loader and component.
 *
 * @param sortable keys that may be sorted by; anything else is left out
 * @param defaultSort such as "-due", used when the URL asks for none
 */
export function readTableQuery(params: URLSearchParams, sortable: readonly string[], defaultSort?: string): TableQuery {
  const page = Number(params.get("page") ?? "1");
  return {
    sort: sortOf(params.get("sort"), sortable) ?? sortOf(defaultSort ?? null, sortable),
    q: (params.get("q") ?? "").trim(),
    page: Number.isInteger(page) && page > 0 ? page : 1,
  };
}

/** The same of a request, for tables whose rows can be set aside: `?aside=1` lists those too. */
export function readListRequest(request: Request, sorts: Record<string, string>, defaultSort?: string): TableQuery & { withSetAside: boolean } {
  const { searchParams } = new URL(request.url);
  return { ...readTableQuery(searchParams, Object.keys(sorts), defaultSort ?? Object.keys(sorts)[0]), withSetAside: searchParams.get("aside") === "1" };
}

function sortOf(text: string | null, sortable: readonly string[]): TableQuery["sort"] {
  if (!text) return null;
  const descending = text.startsWith("-");
  const key = descending ? text.slice(1) : text;
  return sortable.includes(key) ? { key, descending } : null;
}

/** The same address with some of its parameters changed; null takes one out. */
export function withParams(params: URLSearchParams, changes: Record<string, string | null>): string {
  const next = new URLSearchParams(params);
  for (const [key, value] of Object.entries(changes)) {
    if (value === null) next.delete(key);
    else next.set(key, value);
  }
  const text = next.toString();
  return text ? `?${text}` : "?";
}
