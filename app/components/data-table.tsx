import { useId, type ReactNode } from "react";
import { Form, Link, useSearchParams } from "react-router";
import { readTableQuery, withParams, type TableQuery } from "#app/components/table-query.ts";

export interface Column<Row> {
  key: string;
  label: string;
  sortable?: boolean;
  align?: "left" | "number";
  /** Left out on a phone, where the row is stacked. */
  deskOnly?: boolean;
  cell: (row: Row) => ReactNode;
}

export interface DataTableProps<Row> {
  caption: string;
  /** Keep the caption for readers only, where the page's own heading already says it. */
  captionHidden?: boolean;
  columns: Column<Row>[];
  rows: Row[];
  rowKey: (row: Row) => string;
  /** Where a row leads; the first cell is the link and the whole row follows it. */
  rowHref?: (row: Row) => string;
  /** Label of the search box; without it there is none. */
  searchLabel?: string;
  /** Further fields of the same GET form: <select name="state">. */
  filters?: ReactNode;
  defaultSort?: string;
  /** All rows there are, and how many a page shows: with both, a pager. */
  total?: number;
  pageSize?: number;
  /** Address of the same list as CSV; the question of the URL is added. */
  csvHref?: string;
  empty: { text: ReactNode; action?: ReactNode };
  /** On a phone: rows stacked as label and value, or the table scrolled inside. */
  phone?: "stack" | "scroll";
}

/** The one table: sort, search and page live in the URL, so a view can be sent to somebody. */
export function DataTable<Row>(props: DataTableProps<Row>) {
  const { caption, columns, rows, rowKey, rowHref, empty, phone = "stack" } = props;
  const [params] = useSearchParams();
  const query = readTableQuery(params, columns.filter((column) => column.sortable).map((column) => column.key), props.defaultSort);
  const id = useId();
  const stack = phone === "stack";
  const asked = query.q !== "";
  return (
    <div>
      <TableTools {...props} headingId={id} query={query} params={params} />
      {rows.length === 0 ? (
        <div className="border-y border-rule py-8">
          {asked ? (
            <p>
              Nothing matches “{query.q}”.{" "}
              <Link to={withParams(params, { q: null, page: null })} className="word">
                Show all
              </Link>
            </p>
          ) : (
            <div className="flex flex-wrap items-center justify-between gap-x-8 gap-y-3">
              <p className="max-w-prose text-soft">{empty.text}</p>
              {empty.action}
            </div>
          )}
        </div>
      ) : (
        <div className={stack ? "" : "overflow-x-auto"} {...(stack ? {} : { tabIndex: 0, role: "region", "aria-labelledby": id })}>
          {/* Stacking takes the table's meaning away in browsers; the roles give it back. */}
          <table role="table" aria-labelledby={id} className={`w-full text-left ${stack ? "max-sm:block" : "min-w-max"}`}>
            <thead role="rowgroup" className={stack ? "max-sm:sr-only" : ""}>
              <tr role="row" className="border-b border-rule">
                {columns.map((column) => (
                  <HeaderCell key={column.key} column={column} query={query} params={params} />
                ))}
              </tr>
            </thead>
            <tbody role="rowgroup" className={stack ? "max-sm:block" : ""}>
              {rows.map((row) => (
                <tr
                  key={rowKey(row)}
                  role="row"
                  className={`border-b border-hairline ${rowHref ? "relative hover:bg-wash" : ""} ${stack ? "max-sm:grid max-sm:grid-cols-[auto_minmax(0,1fr)] max-sm:gap-x-4 max-sm:py-2.5" : ""}`}
                >
                  {columns.map((column, index) => (
                    <BodyCell key={column.key} column={column} first={index === 0} stack={stack}>
                      {index === 0 && rowHref ? (
                        <Link to={rowHref(row)} className="font-medium after:absolute after:inset-0 hover:text-blue">
                          {column.cell(row)}
                        </Link>
                      ) : (
                        column.cell(row)
                      )}
                    </BodyCell>
                  ))}
                </tr>
              ))}
            </tbody>
          </table>
        </div>
      )}
      <Pager query={query} params={params} total={props.total} pageSize={props.pageSize} caption={caption} />
    </div>
  );
}

interface Asked {
  query: TableQuery;
  params: URLSearchParams;
}

/** Heading, search and CSV on one line over the table. */
function TableTools<Row>({ caption, captionHidden, headingId, searchLabel, filters, csvHref, query, params }: DataTableProps<Row> & Asked & { headingId: string }) {
  const sort = params.get("sort");
  const heading = (
    <h2 id={headingId} className={captionHidden ? "sr-only" : "mr-auto text-lg"}>
      {caption}
    </h2>
  );
  if (!searchLabel && !filters && !csvHref) return captionHidden ? heading : <div className="mb-1">{heading}</div>;
  return (
    <div className={`mb-3 flex flex-wrap items-center gap-x-6 gap-y-2 ${captionHidden ? "justify-between" : ""}`}>
      {heading}
      {(searchLabel || filters) && (
        <Form method="get" role="search" className="no-print flex min-w-0 flex-wrap items-center gap-3 max-sm:w-full" preventScrollReset>
          {sort && <input type="hidden" name="sort" value={sort} />}
          {filters}
          <span className="flex min-w-0 max-sm:w-full">
            {searchLabel && (
              <input
                key={query.q}
                type="search"
                name="q"
                defaultValue={query.q}
                aria-label={searchLabel}
                placeholder={searchLabel}
                className="-mr-px min-h-11 w-64 min-w-0 border border-rule bg-transparent px-3 max-sm:flex-1"
              />
            )}
            <button className="min-h-11 border border-rule px-4 font-semibold hover:border-blue hover:text-blue">{searchLabel ? "Find" : "Show"}</button>
          </span>
        </Form>
      )}
      {csvHref && (
        <a href={csvHref + withParams(params, { page: null }).replace(/^\?$/, "")} download className="word no-print flex min-h-11 items-center">
          CSV
        </a>
      )}
    </div>
  );
}

function HeaderCell<Row>({ column, query, params }: { column: Column<Row> } & Asked) {
  const { key, label, sortable, align } = column;
  const sorted = query.sort?.key === key ? query.sort : null;
  const number = align === "number";
  const next = sorted && !sorted.descending ? `-${key}` : key;
  return (
    <th
      scope="col"
      role="columnheader"
      aria-sort={sorted ? (sorted.descending ? "descending" : "ascending") : undefined}
      className={`py-0.5 align-bottom font-label text-label font-medium text-soft last:pr-0 ${number ? "pr-10 text-right" : "pr-6"}`}
    >
      {sortable ? (
        <Link to={withParams(params, { sort: next, page: null })} preventScrollReset className={`inline-flex min-h-9 items-center gap-1.5 hover:text-ink ${sorted ? "font-semibold text-ink" : ""}`}>
          {label}
          <SortArrow sorted={sorted} />
        </Link>
      ) : (
        <span className="inline-flex min-h-9 items-center">{label}</span>
      )}
    </th>
  );
}

/** A dimension arrow: pointing up or down when sorted, both ways faintly when it could be. */
function SortArrow({ sorted }: { sorted: TableQuery["sort"] }) {
  return (
    <svg viewBox="0 0 7 14" className={`h-3 w-auto fill-none stroke-current ${sorted ? "" : "opacity-50"}`} strokeWidth="1.2" aria-hidden="true">
      <path d="M3.5 1v12" />
      {(!sorted || !sorted.descending) && <path d="M1 4.5 3.5 1 6 4.5" />}
      {(!sorted || sorted.descending) && <path d="M1 9.5 3.5 13 6 9.5" />}
    </svg>
  );
}

function BodyCell<Row>({ column, first, stack, children }: { column: Column<Row>; first: boolean; stack: boolean; children: ReactNode }) {
  const number = column.align === "number";
  const Cell = first ? "th" : "td";
  const stacked = first ? "max-sm:col-span-2 max-sm:text-left" : "max-sm:contents";
  return (
    <Cell
      scope={first ? "row" : undefined}
      role={first ? "rowheader" : "cell"}
      className={`py-2.5 font-normal last:pr-0 ${number ? "whitespace-nowrap pr-10 text-right" : "pr-6"} ${stack ? `max-sm:py-0 max-sm:pr-0 ${stacked}` : ""} ${column.deskOnly ? "max-sm:hidden" : ""}`}
    >
      {stack && !first ? (
        <>
          <span aria-hidden="true" className={`text-left font-label text-label text-soft sm:hidden ${column.deskOnly ? "hidden" : ""}`}>
            {column.label}
          </span>
          <span className="max-sm:text-right">{children}</span>
        </>
      ) : (
        children
      )}
    </Cell>
  );
}

function Pager({ query, params, total, pageSize, caption }: Asked & { total?: number; pageSize?: number; caption: string }) {
  if (total === undefined || pageSize === undefined || total <= pageSize) return null;
  const pages = Math.ceil(total / pageSize);
  const page = Math.min(query.page, pages);
  const from = (page - 1) * pageSize + 1;
  const to = (n: number) => withParams(params, { page: n === 1 ? null : String(n) });
  return (
    <nav aria-label={`Pages of ${caption}`} className="no-print mt-2 flex items-center justify-between gap-6">
      <p className="text-soft">
        {from} to {Math.min(page * pageSize, total)} of {total}
      </p>
      <p className="flex gap-6">
        {page > 1 && (
          <Link to={to(page - 1)} className="word flex min-h-11 items-center">
            Earlier
          </Link>
        )}
        {page < pages && (
          <Link to={to(page + 1)} className="word flex min-h-11 items-center">
            Further
          </Link>
        )}
      </p>
    </nav>
  );
}
