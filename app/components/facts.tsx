import type { ReactNode } from "react";

export interface Fact {
  label: string;
  value: ReactNode;
  /** Another word than the label tells two facts of one label apart. */
  key?: string;
}

/** Label left, value right, a hairline between: money, what was tried, what a file holds. */
export function Facts({ facts, align = "right" }: { facts: Fact[]; align?: "right" | "left" }) {
  return (
    <dl className="divide-y divide-hairline border-b border-hairline">
      {facts.map(({ label, value, key }) => (
        <div key={key ?? label} className="flex items-baseline justify-between gap-x-6 py-2">
          <dt className="text-soft">{label}</dt>
          <dd className={align === "right" ? "text-right" : "min-w-[60%]"}>{value}</dd>
        </div>
      ))}
    </dl>
  );
}
