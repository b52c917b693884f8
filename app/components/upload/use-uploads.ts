import { useCallback, useEffect, useRef, useState } from "react";
import { useRevalidator } from "react-router";
import { refuseSize, type UploadKind, type UploadLimits } from "#app/domain/uploads.ts";
import type { MeasureDocument } from "#app/geometry/measure-document.ts";
import type { InspectAnswer, InspectRequest } from "./inspect-worker.ts";
import { Transfer, TransferRefused, type Announcement } from "./transfer.ts";

export type UploadState = "inspecting" | "ready" | "sending" | "paused" | "sent" | "refused";

export interface UploadItem {
  id: number;
  file: File;
  state: UploadState;
  /** 0 to 1, of inspecting or sending. */
  share: number;
  /** Bytes a second, averaged; null until known. */
  rate: number | null;
  reason: string | null;
  warning: string | null;
  kind: UploadKind | null;
  mediaType: string;
  sha256: string | null;
  measure: MeasureDocument | null;
  unit: "mm" | "in";
}

export interface UseUploadsOptions {
  target: Announcement["target"];
  limits: UploadLimits;
  accepts: readonly UploadKind[];
  /** Starts as soon as a file was looked at, as for a photo from the camera. */
  atOnce?: boolean;
}

let lastId = 0;

/** Files from the moment they are chosen until they are sent. What becomes of them then, the page's loader tells. */
export function useUploads({ target, limits, accepts, atOnce = false }: UseUploadsOptions) {
  const [items, setItems] = useState<UploadItem[]>([]);
  const transfers = useRef(new Map<number, Transfer>());
  const workers = useRef(new Map<number, Worker>());
  const { revalidate } = useRevalidator();

  const change = useCallback((id: number, changes: Partial<UploadItem>) => {
    setItems((before) => before.map((item) => (item.id === id ? { ...item, ...changes } : item)));
  }, []);

  useEffect(() => {
    const open = workers.current;
    const sending = transfers.current;
    return () => {
      for (const worker of open.values()) worker.terminate();
      for (const transfer of sending.values()) transfer.pause();
    };
  }, []);

  // Leaving the page in the middle loses nothing for good, but is rarely meant.
  const busy = items.some(({ state }) => state === "sending");
  useEffect(() => {
    if (!busy) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    addEventListener("beforeunload", ask);
    return () => removeEventListener("beforeunload", ask);
  }, [busy]);

  async function send(item: UploadItem): Promise<void> {
    if (!item.kind || !item.sha256) return;
    const announcement: Announcement = { name: item.file.name, bytes: item.file.size, sha256: item.sha256, kind: item.kind, mediaType: item.mediaType, unit: item.kind === "stl" ? item.unit : null, target };
    const began = performance.now();
    let base: number | null = null;
    const transfer = transfers.current.get(item.id) ?? new Transfer(item.file, announcement, (sent) => {
      base ??= sent;
      const seconds = (performance.now() - began) / 1000;
      change(item.id, { share: sent / item.file.size, rate: seconds > 0.5 ? (sent - base) / seconds : null });
    });
    transfers.current.set(item.id, transfer);
    change(item.id, { state: "sending", reason: null });
    try {
      const complete = await transfer.run();
      if (!complete) return change(item.id, { state: "paused", rate: null });
      change(item.id, { state: "sent", share: 1 });
      await revalidate();
      setItems((before) => before.filter(({ id }) => id !== item.id));
    } catch (fault) {
      change(item.id, { state: "refused", reason: fault instanceof TransferRefused ? fault.message : "Sending failed. Choose the file again; it goes on where it stopped." });
    }
  }

  function inspect(item: UploadItem): void {
    workers.current.get(item.id)?.terminate();
    const worker = new Worker(new URL("./inspect-worker.ts", import.meta.url), { type: "module" });
    workers.current.set(item.id, worker);
    const end = () => {
      worker.terminate();
      workers.current.delete(item.id);
    };
    worker.onerror = () => {
      end();
      change(item.id, { state: "refused", reason: "The file can't be read. Choose it again." });
    };
    worker.onmessage = ({ data }: MessageEvent<InspectAnswer>) => {
      if (data.type === "progress") return change(item.id, { share: data.share });
      end();
      if (data.type === "refused") return change(item.id, { state: "refused", reason: data.reason });
      const unwanted = accepts.includes(data.kind) ? null : `A ${data.kind} file has no place here.`;
      const reason = unwanted ?? refuseSize(data.kind, item.file.size, limits);
      if (reason) return change(item.id, { state: "refused", reason });
      const ready: UploadItem = { ...item, state: "ready", share: 0, kind: data.kind, mediaType: data.mediaType, sha256: data.sha256, measure: data.measure, warning: data.warning };
      change(item.id, ready);
      if (atOnce) void send(ready);
    };
    worker.postMessage({ file: item.file, unit: item.unit } satisfies InspectRequest);
  }

  function add(files: Iterable<File>): void {
    const added = [...files].map((file): UploadItem => ({ id: ++lastId, file, state: "inspecting", share: 0, rate: null, reason: null, warning: null, kind: null, mediaType: "", sha256: null, measure: null, unit: "mm" }));
    setItems((before) => [...before, ...added]);
    added.forEach(inspect);
  }

  /** The unit of an STL is said, never guessed: it is measured again in it. */
  function setUnit(item: UploadItem, unit: "mm" | "in"): void {
    const again = { ...item, unit, state: "inspecting" as const, share: 0 };
    change(item.id, again);
    inspect(again);
  }

  function remove(item: UploadItem): void {
    workers.current.get(item.id)?.terminate();
    void transfers.current.get(item.id)?.cancel();
    transfers.current.delete(item.id);
    setItems((before) => before.filter(({ id }) => id !== item.id));
  }

  const pause = (item: UploadItem) => transfers.current.get(item.id)?.pause();
  const sendAll = () => Promise.all(items.filter(({ state }) => state === "ready" || state === "paused").map(send));
  return { items, add, setUnit, remove, pause, send, sendAll };
}
