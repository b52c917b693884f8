export function readJson(file: string): unknown;
export function writePrivately(file: string, text: string): void;
export function takeLock(file: string): { holder?: { pid: number }; before?: object; release(): void };
export function whileLocked<T>(file: string, work: () => Promise<T>): Promise<T>;
