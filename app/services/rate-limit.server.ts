import { RateLimiterPostgres } from "rate-limiter-flexible";
import { db } from "#db/connection.server.ts";

const quarter = 15 * 60;
const limits = {
  "sign-in": { points: 10, duration: quarter },
  // One address may be a whole shop behind a router.
  "sign-in-address": { points: 50, duration: quarter },
  link: { points: 5, duration: quarter },
  guest: { points: 30, duration: quarter },
} as const;

const limiters = new Map<string, RateLimiterPostgres>();

type Kind = keyof typeof limits;

function limiterOf(kind: Kind): RateLimiterPostgres {
  let limiter = limiters.get(kind);
  if (!limiter) {
    limiter = new RateLimiterPostgres({ storeClient: db(), storeType: "knex", tableName: "rate_limits", tableCreated: true, keyPrefix: kind, ...limits[kind] });
    limiters.set(kind, limiter);
  }
  return limiter;
}

const shortened = (key: string) => key.slice(0, 200);

/** May this key still try? Nothing is counted: where only failures count, `countFailure` does. */
export async function mayTry(kind: Kind, key: string): Promise<boolean> {
  const so = await limiterOf(kind).get(shortened(key));
  return so === null || so.consumedPoints < limits[kind].points;
}

export async function countFailure(kind: Kind, key: string): Promise<void> {
  await limiterOf(kind).penalty(shortened(key));
}

/** Counts one try of this kind by this key, and says whether it is still within the limit. */
export async function allow(kind: Kind, key: string): Promise<boolean> {
  try {
    await limiterOf(kind).consume(shortened(key));
    return true;
  } catch (refused) {
    if (refused instanceof Error) throw refused;
    return false;
  }
}
