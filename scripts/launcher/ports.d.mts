export function freePort(wanted?: number, avoid?: Set<number>): Promise<number>;
export function freePorts(count: number): Promise<number[]>;
