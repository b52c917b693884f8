import { z } from "zod";
import { chosenOrNull, words } from "./fields.server.ts";

/** Fields of a new callout that are the same wherever its spot is; a customer's form sends only the words. */
export const calloutFields = {
  body: words("Say what you mean", 4000),
  visibility: z.enum(["customer", "internal"]).default("internal"),
  assigneeId: chosenOrNull,
};
