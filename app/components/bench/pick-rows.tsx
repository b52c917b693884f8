import type { ReactNode } from "react";

export interface PickRow {
  id: string | null;
  label: ReactNode;
  detail?: ReactNode;
}

/** A list to pick from with gloves on: each row is a key of 64 px. */
export function PickRows({ rows, picked, onPick, label }: { rows: PickRow[]; picked: string | null | undefined; onPick: (id: string | null) => void; label: string }) {
  return (
    <ul aria-label={label} className="grid gap-2">
      {rows.map((row) => (
        <li key={row.id ?? "none"}>
          <button
            type="button"
            aria-pressed={row.id === picked}
            onClick={() => onPick(row.id)}
            className="flex min-h-16 w-full items-center justify-between gap-4 border border-ink px-4 py-2 text-left active:bg-band aria-pressed:border-2 aria-pressed:border-blue aria-pressed:bg-wash"
          >
            <span className="min-w-0">
              <span className="block text-lg font-semibold leading-6">{row.label}</span>
              {row.detail && <span className="block text-soft">{row.detail}</span>}
            </span>
            {row.id === picked && <span className="shrink-0 font-medium text-blue">picked</span>}
          </button>
        </li>
      ))}
    </ul>
  );
}
