/**
 * The queues of the worker. A job's expiry exceeds the longest honest run of it, since the
 * queue has no heartbeat: a job past its expiry is taken for dead and run again.
 */
export const queues = {
  "check-file": { retryLimit: 5, retryDelay: 2, retryBackoff: true, expireInSeconds: 600 },
  "measure-model": { retryLimit: 2, retryDelay: 2, expireInSeconds: 900 },
  "derive-photo": { retryLimit: 4, retryDelay: 2, retryBackoff: true, expireInSeconds: 120 },
  "make-packet": { retryLimit: 50, retryDelay: 2, retryBackoff: true, expireInSeconds: 600 },
  "send-mail": { retryLimit: 12, retryDelay: 5, retryBackoff: true, expireInSeconds: 120 },
  "sweep": { retryLimit: 1, expireInSeconds: 600 },
} as const;

export type QueueName = keyof typeof queues;

/** What a job carries: the shop whose rows it works on, and the row it is about. */
export interface JobPayload {
  shopId: string | null;
  id: string;
}
