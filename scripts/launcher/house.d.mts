export const ROOT: string;
export function parseDotEnv(text: string): Record<string, string>;
