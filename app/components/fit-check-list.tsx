import { Link } from "react-router";
import { href } from "react-router";
import { Day } from "#app/components/day.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";
import type { FitMark } from "#app/domain/fit.ts";

export interface FitCheckView {
  id: string;
  matingPartName: string;
  byName: string;
  at: Date | string;
  mark: FitMark;
  sentence: string;
  cause: string | null;
}

/** Fit checks, newest first: on what, who, when, and how it went. */
export function FitCheckList({ checks }: { checks: FitCheckView[] }) {
  return (
    <ul className="divide-y divide-hairline border-y border-hairline">
      {checks.map((check) => (
        <li key={check.id}>
          <Link to={href("/fit-checks/:fitCheckId", { fitCheckId: check.id })} className="flex min-h-14 flex-wrap items-center justify-between gap-x-6 gap-y-1 py-2.5 hover:bg-wash">
            <span>
              <span className="block font-medium">On {check.matingPartName}</span>
              <span className="text-soft">
                {check.byName}, <Day at={check.at} time />
              </span>
            </span>
            <span className="sm:text-right">
              <GateMark state={check.mark} word={check.sentence} />
              {check.cause && <span className="block text-soft">because of {check.cause}</span>}
            </span>
          </Link>
        </li>
      ))}
    </ul>
  );
}
