import { createHash } from "node:crypto";
import fs from "node:fs/promises";
import net from "node:net";

/**
 * Keeps a folder for this process. Two stores in one would each delete what only the other knows.
 *
 * Linux frees the name when the process ends in whatever way; other systems have no such names,
 * and nothing is held there.
 *
 * @returns lets go of it
 * @throws Error when another process holds it
 */
export async function holdFolder(dir: string): Promise<() => Promise<void>> {
  await fs.mkdir(dir, { recursive: true });
  if (process.platform !== "linux") return async () => undefined;
  const { dev, ino } = await fs.stat(dir);
  const name = createHash("sha256").update(`${dev}:${ino}`).digest("hex").slice(0, 32);
  const server = net.createServer((socket) => socket.destroy());
  await new Promise<void>((resolve, reject) => {
    server.once("error", (error: NodeJS.ErrnoException) => reject(error.code === "EADDRINUSE" ? new Error(`${dir} is in use by another store. Stop it, or name another folder.`) : error));
    server.listen(`\0spotblue-store-${name}`, resolve);
  });
  server.unref();
  return () => new Promise((resolve) => server.close(() => resolve()));
}
