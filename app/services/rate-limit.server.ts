import { RateLimiterPostgres } from "rate-limiter-flexible";
import { db } from "#db/connection.server.ts";

const quarter = 15 * 60;
const limits = {
  "sign-in": { points: 10, duration: quarter },
  link: { points: 5, duration: quarter },
  guest: { points: 30, duration: quarter },
} as const;

const limiters = new Map<string, RateLimiterPostgres>();

/** Counts one try of this kind by this key, and says whether it is still within the limit. */
export async function allow(kind: keyof typeof limits, key: string): Promise<boolean> {
  let limiter = limiters.get(kind);
  if (!limiter) {
    limiter = new RateLimiterPostgres({ storeClient: db(), storeType: "knex", tableName: "rate_limits", tableCreated: true, keyPrefix: kind, ...limits[kind] });
    limiters.set(kind, limiter);
  }
  try {
    await limiter.consume(key.slice(0, 200));
    return true;
  } catch (refused) {
    if (refused instanceof Error) throw refused;
    return false;
  }
}
