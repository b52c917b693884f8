import { useId, type ReactNode } from "react";

export interface TitleCell {
  label: string;
  value: ReactNode;
  /** Stays in sight on a phone; the others fold away. Without any, the first three stay. */
  phone?: boolean;
  /** Takes two of the three columns, or all. */
  span?: 2 | 3;
}

const spans = { 1: "", 2: "col-span-2", 3: "col-span-3" };

/** The title block of a drawing: lower right on a sheet, folded on top on a phone. */
export function TitleBlock({ cells }: { cells: TitleCell[] }) {
  const id = useId();
  const marked = cells.some((cell) => cell.phone);
  const folds = cells.map((cell, index) => (marked ? !cell.phone : index > 2));
  return (
    <div className="relative border-b border-ink lg:border-b-0 lg:border-l lg:border-t">
      {folds.includes(true) && <input type="checkbox" id={id} className="peer sr-only lg:hidden" />}
      <dl className="title-block grid grid-cols-[minmax(0,1.3fr)_minmax(0,1fr)_minmax(0,1fr)] overflow-hidden max-lg:pr-10">
        {cells.map(({ label, value, span }, index) => (
          <div key={label} className={`-mb-px -mr-px border-b border-r border-ink px-3 py-1.5 lg:py-2 ${folds[index] ? "title-fold" : ""} ${spans[span ?? 1]}`}>
            <dt className="font-label text-xs font-medium text-soft">{label}</dt>
            <dd className="font-semibold [overflow-wrap:anywhere]">{value}</dd>
          </div>
        ))}
      </dl>
      {folds.includes(true) && (
        <label htmlFor={id} className="absolute right-0 top-0 flex h-full min-h-11 w-10 items-start justify-center pt-4 peer-focus-visible:outline-2 peer-focus-visible:outline-blue lg:hidden">
          <span className="sr-only">Whole title block</span>
          <svg viewBox="0 0 12 8" className="w-3 fill-none stroke-ink" strokeWidth="1.5" aria-hidden="true">
            <path d="M1 1.5 6 6.5 11 1.5" />
          </svg>
        </label>
      )}
    </div>
  );
}
