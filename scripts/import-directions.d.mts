import type { Rule } from "eslint";

export function reasonAgainst(fromRoot: string, source: string): string | undefined;
export const importDirections: Rule.RuleModule;
