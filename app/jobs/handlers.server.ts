import type { JobPayload, QueueName } from "./queues.ts";
import { checkFile } from "./check-file.server.ts";
import { derivePhoto } from "./derive-photo.server.ts";
import { makePacket } from "./make-packet.server.ts";
import { measureModel } from "./measure-model.server.ts";
import { sendMail } from "./send-mail.server.ts";
import { sweep } from "./sweep.server.ts";

/** Does one job. A handler may run twice for one job (the queue promises at least once) and must not mind. */
export type Handler = (job: JobPayload, stopping: AbortSignal) => Promise<void>;

export const handlers: Partial<Record<QueueName, Handler>> = {
  "check-file": checkFile,
  "derive-photo": derivePhoto,
  "make-packet": makePacket,
  "measure-model": measureModel,
  "send-mail": sendMail,
  sweep,
};
