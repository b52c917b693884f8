import type { UploadKind } from "#app/domain/uploads.ts";

export interface Announcement {
  name: string;
  bytes: number;
  sha256: string;
  kind: UploadKind;
  mediaType: string;
  unit: "mm" | "in" | null;
  target: { to: string; id: string; characteristicId?: string | null };
}

interface Ticket {
  fileId: string;
  partBytes: number;
  parts: number;
  done: number[];
}

/** The server or the store said no; the message is for the person. */
export class TransferRefused extends Error {
  override name = "TransferRefused";
}

const partsAtOnce = 4;
const longestWait = 30_000;

/**
 * Sends one file straight to the store, part by part, four at once. A part that fails is sent
 * again after a growing wait for as long as the connection is away; pausing ends the parts under
 * way and keeps the finished ones.
 */
export class Transfer {
  #ticket: Ticket | null = null;
  #sentOfPart = new Map<number, number>();
  #doneParts = new Set<number>();
  #paused: AbortController | null = null;
  #ended = new AbortController();
  readonly #file: File;
  readonly #announcement: Announcement;
  readonly #onSent: (bytes: number) => void;

  constructor(file: File, announcement: Announcement, onSent: (bytes: number) => void) {
    this.#file = file;
    this.#announcement = announcement;
    this.#onSent = onSent;
  }

  /** Sends what is not sent yet. Resolves to true when all is there, to false when it was paused. */
  async run(): Promise<boolean> {
    this.#paused = new AbortController();
    const signal = AbortSignal.any([this.#paused.signal, this.#ended.signal]);
    try {
      this.#ticket ??= await ask<Ticket>("/api/uploads", { method: "POST", body: JSON.stringify(this.#announcement), headers: { "Content-Type": "application/json" }, signal });
      const ticket = this.#ticket;
      for (const n of ticket.done) this.#doneParts.add(n);
      const waiting = Array.from({ length: ticket.parts }, (_, i) => i + 1).filter((n) => !this.#doneParts.has(n));
      this.#tell();
      const lane = async () => {
        for (let n = waiting.shift(); n !== undefined; n = waiting.shift()) await this.#sendPart(ticket, n, signal);
      };
      await Promise.all(Array.from({ length: partsAtOnce }, lane));
      await ask(`/api/uploads/${ticket.fileId}`, { method: "POST", signal });
      return true;
    } catch (fault) {
      if (signal.aborted) return false;
      throw fault;
    }
  }

  pause(): void {
    this.#paused?.abort();
  }

  async cancel(): Promise<void> {
    this.#ended.abort();
    if (this.#ticket) await ask(`/api/uploads/${this.#ticket.fileId}`, { method: "DELETE" }).catch(() => undefined);
  }

  async #sendPart(ticket: Ticket, n: number, signal: AbortSignal): Promise<void> {
    const from = (n - 1) * ticket.partBytes;
    const part = this.#file.slice(from, Math.min(from + ticket.partBytes, this.#file.size));
    for (let wait = 500; ; wait = Math.min(wait * 2, longestWait)) {
      signal.throwIfAborted();
      try {
        const { parts } = await ask<{ parts: Array<{ url: string }> }>(`/api/uploads/${ticket.fileId}?parts=${n}`, { signal });
        await this.#put(parts[0]!.url, part, n, signal);
        this.#sentOfPart.delete(n);
        this.#doneParts.add(n);
        this.#tell();
        return;
      } catch (fault) {
        signal.throwIfAborted();
        if (fault instanceof TransferRefused) throw fault;
        this.#sentOfPart.delete(n);
        this.#tell();
        await pause(wait, signal);
      }
    }
  }

  // XMLHttpRequest, since fetch does not tell how much of a body has been sent.
  #put(url: string, body: Blob, n: number, signal: AbortSignal): Promise<void> {
    return new Promise((resolve, reject) => {
      const request = new XMLHttpRequest();
      const abort = () => request.abort();
      signal.addEventListener("abort", abort, { once: true });
      request.open("PUT", url);
      request.upload.onprogress = ({ loaded }) => {
        this.#sentOfPart.set(n, loaded);
        this.#tell();
      };
      request.onloadend = () => signal.removeEventListener("abort", abort);
      request.onload = () => (request.status >= 200 && request.status < 300 ? resolve() : reject(new Error(`the store answered ${request.status}`)));
      request.onerror = request.onabort = () => reject(new Error("the connection was lost"));
      request.send(body);
    });
  }

  #tell(): void {
    if (!this.#ticket) return;
    let sent = 0;
    for (const n of this.#doneParts) sent += Math.min(this.#ticket.partBytes, this.#file.size - (n - 1) * this.#ticket.partBytes);
    for (const bytes of this.#sentOfPart.values()) sent += bytes;
    this.#onSent(Math.min(sent, this.#file.size));
  }
}

async function ask<T>(url: string, init: RequestInit): Promise<T> {
  const answer = await fetch(url, { ...init, headers: { Accept: "application/json", ...init.headers } });
  if (answer.ok) return (await answer.json()) as T;
  if (answer.status >= 500) throw new Error(`the server answered ${answer.status}`);
  const body: unknown = await answer.json().catch(() => null);
  const reason = typeof body === "object" && body !== null && "reason" in body ? String(body.reason) : answer.status === 401 ? "You were signed out meanwhile. Sign in again and choose the same file: it goes on where it stopped." : "This was refused.";
  throw new TransferRefused(reason);
}

function pause(ms: number, signal: AbortSignal): Promise<void> {
  return new Promise((resolve, reject) => {
    const timer = setTimeout(done, ms);
    const online = () => done();
    function done() {
      clearTimeout(timer);
      removeEventListener("online", online);
      signal.removeEventListener("abort", stop);
      resolve();
    }
    function stop() {
      clearTimeout(timer);
      removeEventListener("online", online);
      reject(signal.reason as Error);
    }
    addEventListener("online", online, { once: true });
    signal.addEventListener("abort", stop, { once: true });
  });
}
