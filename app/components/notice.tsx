import type { ReactNode } from "react";
import { MarkShape } from "#app/components/gate-marks.tsx";

export interface NoticeProps {
  kind: "success" | "error" | "info";
  children: ReactNode;
  action?: ReactNode;
}

const marks = { success: "met", error: "failed", info: "open" } as const;
const rules = { success: "border-met", error: "border-failed", info: "border-rule" } as const;

/** Something happened; readers hear it without moving the focus. */
export function Notice({ kind, children, action }: NoticeProps) {
  return (
    <div role={kind === "error" ? "alert" : "status"} className={`mb-5 flex flex-wrap items-center gap-x-3 gap-y-1 border-y-[1.5px] py-2 ${rules[kind]}`}>
      <MarkShape state={marks[kind]} className="h-3 w-auto shrink-0" />
      <div className="min-w-0 flex-1 py-1 font-medium">{children}</div>
      {action}
    </div>
  );
}
