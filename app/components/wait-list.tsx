import type { ReactNode } from "react";

export interface WaitItemProps {
  /** A sentence: "Filler flange 4 is at the gate". */
  title: ReactNode;
  text?: ReactNode;
  /** Since when, when that is long: "6 days". */
  since?: ReactNode;
  picture?: ReactNode;
  /** Such as a GateRow. */
  marks?: ReactNode;
  /** Exactly one. */
  action: ReactNode;
}

export function WaitList({ children }: { children: ReactNode }) {
  return <ul className="divide-y divide-hairline border-b border-t-[1.5px] border-b-hairline border-t-ink">{children}</ul>;
}

/** One thing that waits on a person, with its one action. */
export function WaitItem({ title, text, since, picture, marks, action }: WaitItemProps) {
  return (
    <li className="flex flex-wrap items-center gap-x-7 gap-y-3 py-4 sm:flex-nowrap">
      {picture && <div className="w-20 shrink-0 max-sm:w-14">{picture}</div>}
      <div className="min-w-0 flex-1">
        <p className="text-lg/6 font-semibold">{title}</p>
        {text && <p className="text-soft">{text}</p>}
        {since && <p className="font-medium text-attention">{since}</p>}
        {marks && <p className="mt-1.5">{marks}</p>}
      </div>
      <div className="max-sm:w-full max-sm:[&_.button]:w-full">{action}</div>
    </li>
  );
}
