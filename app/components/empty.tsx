import type { ReactNode } from "react";

export interface EmptyProps {
  /** What is not here yet, and what it would be good for. */
  children: ReactNode;
  action?: ReactNode;
}

/** Where nothing is yet: says so, and offers the one step that changes it. */
export function Empty({ children, action }: EmptyProps) {
  return (
    <div className="flex flex-wrap items-center justify-between gap-x-8 gap-y-3 border-y border-dashed border-rule py-6">
      <p className="max-w-prose text-soft">{children}</p>
      {action}
    </div>
  );
}
