export interface Cluster {
  port: number;
  adminUrl: string;
  urls(database: string): { ownerUrl: string; appUrl: string };
  sql(text: string, database?: string): Promise<string>;
  createDatabase(name: string): Promise<void>;
  handle: { identity: { pid: number; begin: string | undefined }; ended: Promise<unknown> };
  stop(): Promise<void>;
}

export function startCluster(where: { dataDir: string; secretsFile: string; logFile: string; throwAway?: boolean }): Promise<Cluster>;
