import pg from "pg";
import type { Viewer } from "#app/domain/viewer.ts";
import { env } from "#app/env.server.ts";

/** Something of a job changed; pages that show it load their data again. */
export interface ShopEvent {
  shopId: string;
  jobId: string;
  topic: "file" | "measure" | "callout" | "gate" | "packet";
  id: string;
}

type Listener = (event: ShopEvent) => void;

const listeners = new Set<Listener>();
let connection: Promise<pg.Client> | undefined;

// One connection listens for all open pages of this process; PostgreSQL carries the notices
// between processes, so that the worker's progress reaches a page on any of them.
async function listen(): Promise<pg.Client> {
  const client = new pg.Client({ connectionString: env.DATABASE_URL, application_name: "spotblue events" });
  client.on("error", () => { connection = undefined; });
  client.on("notification", ({ payload }) => {
    if (!payload) return;
    const event = JSON.parse(payload) as ShopEvent;
    for (const listener of listeners) listener(event);
  });
  await client.connect();
  await client.query("listen spotblue_events");
  return client;
}

function mayHear(viewer: Viewer, event: ShopEvent): boolean {
  return event.shopId === viewer.shopId && (viewer.jobs === "*" || viewer.jobs.includes(event.jobId));
}

const stopping = new AbortController();
process.once("SIGTERM", () => stopping.abort());
process.once("SIGINT", () => stopping.abort());

const pulse = 25_000;

/**
 * The stream of events that a viewer may hear, as server-sent events. It ends with the page,
 * with this process, and after ten minutes, when the browser asks again and is checked again.
 */
export function eventStream(viewer: Viewer, signal: AbortSignal): Response {
  const encoder = new TextEncoder();
  const ended = AbortSignal.any([signal, stopping.signal, AbortSignal.timeout(600_000)]);
  let end = () => {};
  const body = new ReadableStream<Uint8Array>({
    // The page went away: nothing may be sent into what is closed.
    cancel: () => end(),
    async start(controller) {
      let open = true;
      const send = (text: string) => {
        if (open) controller.enqueue(encoder.encode(text));
      };
      const listener: Listener = (event) => {
        if (mayHear(viewer, event)) send(`data: ${JSON.stringify(event)}\n\n`);
      };
      const timer = setInterval(() => send(": still here\n\n"), pulse);
      end = () => {
        open = false;
        clearInterval(timer);
        listeners.delete(listener);
        try {
          controller.close();
        } catch (closed) {
          if (!(closed instanceof TypeError)) throw closed; // the browser closed it first
        }
      };
      ended.addEventListener("abort", () => end(), { once: true });
      listeners.add(listener);
      connection ??= listen();
      await connection.catch((fault: unknown) => {
        connection = undefined;
        console.error("events:", fault);
      });
      if (!ended.aborted) send("retry: 2000\n\ndata: {\"topic\":\"hello\"}\n\n");
    },
  });
  return new Response(body, { headers: { "Content-Type": "text/event-stream", "Cache-Control": "no-cache, no-transform", "X-Accel-Buffering": "no" } });
}
