import { MM_PER_INCH } from "../units.ts";
import { metricThreads } from "./tables/threads-metric.ts";
import { unifiedThreads } from "./tables/threads-unified.ts";

/** A screw thread with the limits that decide its strength; all lengths mm. */
export interface Thread {
  designation: string;
  system: "metric" | "unified";
  diameter: number;
  pitch: number;
  screwClass: "6g" | "2A";
  holeClass: "6H" | "2B";
  /** Least major and pitch diameter of the screw (6g or 2A). */
  screwMajorMin: number;
  screwPitchMin: number;
  /** Largest minor and pitch diameter of the tapped hole (6H or 2B). */
  holeMinorMax: number;
  holePitchMax: number;
  tapDrill: number;
}

const inch = (value: number) => value * MM_PER_INCH;

const threads: readonly Thread[] = [
  ...metricThreads.map((row): Thread => ({ designation: row.thread, system: "metric", diameter: row.diameter, pitch: row.pitch, screwClass: "6g", holeClass: "6H", screwMajorMin: row.majorMin6g, screwPitchMin: row.pitchMin6g, holeMinorMax: row.minorMax6H, holePitchMax: row.pitchMax6H, tapDrill: row.tapDrill })),
  ...unifiedThreads.map((row): Thread => ({ designation: row.thread, system: "unified", diameter: inch(row.diameter), pitch: MM_PER_INCH / row.threadsPerInch, screwClass: "2A", holeClass: "2B", screwMajorMin: inch(row.majorMin2A), screwPitchMin: inch(row.pitchMin2A), holeMinorMax: inch(row.minorMax2B), holePitchMax: inch(row.pitchMax2B), tapDrill: inch(row.tapDrill) })),
];

export const threadDesignations: readonly string[] = threads.map(({ designation }) => designation);

/** "M6 × 1,00 - 6H", '#10-32 UNF-2B' and 'No. 10-32' as the tables write them: "m6x1", "10-32unf", "10-32". */
function plain(text: string): string {
  return text
    .toLowerCase()
    .replace(/[×*]/g, "x")
    .replace(/,/g, ".")
    .replace(/[\s-]+(6h(\/6g)?|6g|2b(\/2a)?|2a)$/, "")
    .replace(/^no\.?(?=\s*\d)/, "")
    .replace(/[\s#"″]/g, "")
    .replace(/^(m[\d.]+x)-?/, "$1")
    .replace(/(\d\.\d*?)0+(?=x|$)/g, "$1")
    .replace(/\.(?=x|$)/g, "");
}

/**
 * The thread of this designation: "M6x1", "M6", "1/4-20 UNC", "#10-32". Coarse where no pitch is said;
 * a class behind it (6H, 2B) is read over.
 *
 * @returns undefined for a thread outside the tables: nothing is made up between rows
 */
export function findThread(text: string): Thread | undefined {
  const wanted = plain(text);
  return (
    threads.find(({ designation }) => plain(designation) === wanted) ??
    // The table lists a size's coarse thread first.
    threads.find(({ designation, system }) => (system === "metric" ? plain(designation).split("x")[0] === wanted : plain(designation).replace(/un[cf]$/, "") === wanted))
  );
}

/** Tensile stress area, mm²: ISO 898-1 π/4 (d − 0.9382 P)², for unified threads NBS Handbook H28 π/4 (D − 0.9743/n)². */
export function tensileStressArea({ system, diameter, pitch }: Pick<Thread, "system" | "diameter" | "pitch">): number {
  return (Math.PI / 4) * (diameter - (system === "metric" ? 0.9382 : 0.9743) * pitch) ** 2;
}
