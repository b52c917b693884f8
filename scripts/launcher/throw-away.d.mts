// Types of the launcher's parts that tests use; the launcher itself runs before anything is
// installed, and is plain JavaScript.

interface ClusterAccess {
  adminUrl: string;
  urls(database: string): { ownerUrl: string; appUrl: string };
}

export function makeThrowAwayFolder(): Promise<{ folder: string; note(children?: { name: string; pid: number; begin?: string }[]): void; remove(): void }>;
export function startThrowAwayCluster(): Promise<ClusterAccess & { env: Record<string, string>; stop(): Promise<void> }>;
export function givenCluster(env?: NodeJS.ProcessEnv): ClusterAccess | undefined;
export function newDatabaseName(kind: string): string;
export function migrateDatabase(ownerUrl: string): Promise<void>;
