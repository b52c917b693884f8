/** Why a fit check failed: the design, the print, or a wrong reading of the mating part. */
export const fitCauses = ["design", "print", "misread"] as const;
export type FitCause = (typeof fitCauses)[number];
