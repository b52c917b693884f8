import { useEffect } from "react";
import { useRevalidator } from "react-router";

/** Several notices of one burst load the page again once. */
const gatherMs = 150;

/**
 * Keeps a page of a job as it is in the database: when something of the job changes, its data is
 * loaded again. A page opened later reads the same state from its loader.
 */
export function useLive(jobId: string): void {
  const { revalidate } = useRevalidator();
  useEffect(() => {
    let timer: ReturnType<typeof setTimeout> | undefined;
    const reload = () => {
      clearTimeout(timer);
      timer = setTimeout(() => void revalidate(), gatherMs);
    };
    const source = new EventSource("/api/events");
    source.onmessage = ({ data }: MessageEvent<string>) => {
      const event = JSON.parse(data) as { topic: string; jobId?: string };
      // Between the page's data and the first word of the stream, or while a connection was lost,
      // anything may have happened.
      if (event.topic === "hello" || event.jobId === jobId) reload();
    };
    return () => {
      clearTimeout(timer);
      source.close();
    };
  }, [jobId, revalidate]);
}
