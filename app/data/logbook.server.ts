import { createHash } from "node:crypto";
import type { Tx } from "./scope.server.ts";

export interface LogEntry {
  shopId: string;
  actorId: string | null;
  actor: string;
  action: string;
  subjectType: string;
  subjectId: string | null;
  jobId?: string | null;
  detail?: Record<string, unknown>;
}
