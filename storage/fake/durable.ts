import { randomUUID } from "node:crypto";
import fs from "node:fs/promises";
import path from "node:path";

/** Makes what happened to the names in a folder survive a loss of power. */
export async function syncFolder(folder: string): Promise<void> {
  const handle = await fs.open(folder, "r");
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

/** Ends the name of a file that is being written; after a crash it is of no use. */
export const UNFINISHED = ".new";

/** Replaces a file as a whole: after a crash there is the old text or the new one, never half of it. */
export async function replaceFile(file: string, text: string): Promise<void> {
  const temporary = `${file}.${randomUUID()}${UNFINISHED}`;
  try {
    const handle = await fs.open(temporary, "wx");
    try {
      await handle.writeFile(text);
      await handle.sync();
    } finally {
      await handle.close();
    }
    await fs.rename(temporary, file);
  } catch (error) {
    await fs.rm(temporary, { force: true });
    throw error;
  }
  await syncFolder(path.dirname(file));
}

export async function removeFile(file: string): Promise<void> {
  await fs.rm(file, { force: true });
  await syncFolder(path.dirname(file));
}

export async function makeFolder(folder: string): Promise<void> {
  await fs.mkdir(folder, { recursive: true });
  await syncFolder(path.dirname(folder));
}
