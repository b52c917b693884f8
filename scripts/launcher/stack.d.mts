export function neededFakes(given: Record<string, string | undefined>): { database: boolean; store: boolean; mail: boolean; github: boolean };
