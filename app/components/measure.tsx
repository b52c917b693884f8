import { createContext, useContext, type ReactNode } from "react";

export type LengthUnit = "mm" | "in";

const UnitsContext = createContext<LengthUnit>("mm");

/** The page's one unit of length; every length, area and volume below follows it. */
export function UnitsProvider({ units, children }: { units: LengthUnit; children: ReactNode }) {
  return <UnitsContext.Provider value={units}>{children}</UnitsContext.Provider>;
}

export function useUnits(): LengthUnit {
  return useContext(UnitsContext);
}
