import { Length } from "#app/components/measure.tsx";

export interface LimitsProps {
  /** mm; null or left out: no limit on that side. */
  lower?: number | null;
  upper?: number | null;
  /** Said where there is no limit at all. */
  none?: string;
}

/** Limits in words: "6.60 to 6.75 mm", "at least 12 mm". */
export function Limits({ lower = null, upper = null, none = "not stated" }: LimitsProps) {
  if (lower !== null && upper !== null) {
    return (
      <span className="whitespace-nowrap">
        <Length mm={lower} bare /> to <Length mm={upper} />
      </span>
    );
  }
  if (lower !== null) return <>at least <Length mm={lower} /></>;
  if (upper !== null) return <>at most <Length mm={upper} /></>;
  return <span className="text-soft">{none}</span>;
}
