export function hashOf(places: string[], root?: string): string;
export function missingPackages(root?: string): string[];
