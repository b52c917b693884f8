import { createContext, useContext, type ReactNode } from "react";
import { groupDigits, lengthIn, numberText, type LengthUnit } from "#app/components/measure-text.ts";

export type { LengthUnit };

const UnitsContext = createContext<LengthUnit>("mm");

/** The page's one unit of length; every length, area, volume and mass below follows it. */
export function UnitsProvider({ units, children }: { units: LengthUnit; children: ReactNode }) {
  return <UnitsContext.Provider value={units}>{children}</UnitsContext.Provider>;
}

export function useUnits(): LengthUnit {
  return useContext(UnitsContext);
}

export interface NumProps {
  /** As stored; text keeps every digit that was read. */
  value: number | string;
  /** Decimals shown; left out: as many as the value has, up to six. */
  digits?: number;
  /** Decimals the column keeps room for, so that points stand under each other. */
  align?: number;
  unit?: ReactNode;
  /** "+0.15" for a difference. */
  signed?: boolean;
}

/** A number with its unit; the value as stored stays reachable in the markup when it is shown rounded. */
export function Num({ value, digits, align, unit, signed }: NumProps) {
  const text = numberText(Number(value), digits, signed);
  const decimals = text.split(".")[1]?.length ?? 0;
  const pad = align === undefined ? "" : `${decimals === 0 && align > 0 ? "." : ""}${"0".repeat(Math.max(0, align - decimals))}`;
  return (
    <data value={String(value)} className="whitespace-nowrap">
      <span data-pad={pad || undefined} className={pad ? "number-pad" : undefined}>
        {groupDigits(text)}
      </span>
      {unit && <span className="text-[0.9em] text-soft"> {unit}</span>}
    </data>
  );
}

export interface LengthProps extends Omit<NumProps, "value" | "unit"> {
  /** mm, as stored. */
  mm: number | string;
  /** Left out in a column whose heading says the unit. */
  bare?: boolean;
}

/** A length; inches get two decimals more than millimetres, which is the same fineness. */
export function Length({ mm, bare, digits, align, ...rest }: LengthProps) {
  const units = useUnits();
  const value = units === "mm" ? mm : lengthIn(Number(mm), "in");
  const finer = (count: number | undefined) => (count === undefined || units === "mm" ? count : count + 2);
  return <Num {...rest} value={value} digits={finer(digits) ?? (units === "in" ? 4 : undefined)} align={finer(align)} unit={bare ? undefined : units} />;
}

/** mm², shown in cm² from 100 on, or in². */
export function Area({ mm2, digits }: { mm2: number; digits?: number }) {
  const units = useUnits();
  if (units === "in") return <Num value={lengthIn(lengthIn(mm2, "in"), "in")} digits={digits ?? 3} unit="in²" />;
  return mm2 >= 100 ? <Num value={mm2 / 100} digits={digits ?? 2} unit="cm²" /> : <Num value={mm2} digits={digits ?? 2} unit="mm²" />;
}

/** mm³, shown in cm³ from 100 on, or in³. */
export function Volume({ mm3, digits }: { mm3: number; digits?: number }) {
  const units = useUnits();
  if (units === "in") return <Num value={lengthIn(lengthIn(lengthIn(mm3, "in"), "in"), "in")} digits={digits ?? 3} unit="in³" />;
  return mm3 >= 100 ? <Num value={mm3 / 1000} digits={digits ?? 2} unit="cm³" /> : <Num value={mm3} digits={digits ?? 1} unit="mm³" />;
}

/** One pound in kilograms, exact: international yard and pound agreement of 1959. */
const KG_PER_POUND = 0.45359237;

/** kg, shown in g below one, or in pounds on a page in inches. */
export function Mass({ kg, digits, signed }: { kg: number; digits?: number; signed?: boolean }) {
  const units = useUnits();
  if (units === "in") return <Num value={kg / KG_PER_POUND} digits={digits ?? 3} signed={signed} unit="lb" />;
  return Math.abs(kg) < 1 ? <Num value={kg * 1000} digits={digits ?? 1} signed={signed} unit="g" /> : <Num value={kg} digits={digits ?? 3} signed={signed} unit="kg" />;
}
