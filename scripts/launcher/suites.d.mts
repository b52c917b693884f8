interface Count { passed: number; failed: number; skipped: number }

export const SUITES: string[];
export function readArguments(args: string[]): { suites: string[]; filters: string[]; passedOn: string[] };
export function vitestCount(report: object | undefined, code: number | null): Count;
export function playwrightCount(report: object | undefined, code: number | null): Count;
