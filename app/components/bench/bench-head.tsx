import { href, Link } from "react-router";
import type { FitMark } from "#app/domain/fit.ts";

export interface ProgressMark {
  name: string;
  state: FitMark | "none";
}

export interface BenchHeadProps {
  part: string;
  print: { id: string; name: string; words: string };
  kept: boolean;
  marks: ProgressMark[];
  at: number;
}

/** What is tried, that it is kept, and how far one is. */
export function BenchHead({ part, print, kept, marks, at }: BenchHeadProps) {
  const cell = "min-w-0 border-r border-ink px-3 py-1.5 first:pl-0 last:border-r-0 last:pr-0";
  const done = marks.filter(({ state }) => state !== "none").length;
  return (
    <header>
      <div className="grid grid-cols-[minmax(0,1fr)_auto_auto] border-b-[1.5px] border-ink">
        <p className={cell}>
          <span className="block font-label text-xs font-medium text-soft">Part</span>
          <span className="block truncate font-semibold">{part}</span>
        </p>
        <Link to={href("/prints/:printId", { printId: print.id })} className={`${cell} hover:bg-wash`}>
          <span className="block font-label text-xs font-medium text-soft">Print</span>
          <span className="block max-w-40 truncate font-semibold text-blue">
            {print.name}, {print.words}
          </span>
        </Link>
        <p className={cell} role="status">
          <span className="block font-label text-xs font-medium text-soft">{kept ? "Kept" : "Not kept"}</span>
          <span className={`block font-semibold ${kept ? "" : "text-attention"}`}>{kept ? "on this phone" : "send it now"}</span>
        </p>
      </div>
      {marks.length > 0 && (
        <div role="img" aria-label={`${done} of ${marks.length} tried`} className="mt-3 flex h-2.5 gap-1.5">
          {marks.map(({ name, state }, index) => (
            <span key={name + index} className={`flex-1 border ${markClass(state)} ${index === at ? "outline-2 outline-offset-1 outline-blue" : ""}`} />
          ))}
        </div>
      )}
    </header>
  );
}

/** Solid is inside, barred has failed, half is begun, hollow is ahead or skipped. */
function markClass(state: ProgressMark["state"]): string {
  switch (state) {
    case "met":
      return "border-met bg-met";
    case "failed":
      return "border-failed bg-[repeating-linear-gradient(-45deg,var(--failed)_0_2px,transparent_2px_5px)]";
    case "open":
      return "border-ink bg-[linear-gradient(90deg,var(--ink)_50%,transparent_50%)]";
    case "none":
      return "border-rule";
  }
}
