import { createHash, randomBytes } from "node:crypto";
import { hash, verify } from "@node-rs/argon2";

/** A secret for a cookie or a link (256 bits), and what is stored in its place. */
export function newToken(): { token: string; tokenHash: Buffer } {
  const token = randomBytes(32).toString("base64url");
  return { token, tokenHash: hashToken(token) };
}

export function hashToken(token: string): Buffer {
  return createHash("sha256").update(token).digest();
}

// Argon2id (the library's default algorithm) above the least that OWASP advises (19 MiB, 2 passes).
const cost = { memoryCost: 32 * 1024, timeCost: 3, parallelism: 1 };

export function hashPassword(password: string): Promise<string> {
  return hash(password, cost);
}

let decoy: Promise<string> | undefined;

/** Compares a password. Somebody without an account costs the same time as a wrong password. */
export async function passwordMatches(stored: string | null, password: string): Promise<boolean> {
  decoy ??= hashPassword("nobody has this password");
  const matches = await verify(stored ?? (await decoy), password);
  return stored !== null && matches;
}
