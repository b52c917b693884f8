import { href } from "react-router";
import type { Crumb } from "#app/components/frame.tsx";
import { revisionCrumbs } from "#app/components/revision-crumbs.ts";

interface Place {
  job: { id: string; number: string; title: string };
  part: { name: string };
  revision: { id: string; ordinal: number };
  forCustomer: boolean;
}

/** The words above a page that customers reach too: theirs lead back to the calm page of their job. */
export function shownCrumbs(place: Place, last: string): Crumb[] {
  if (!place.forCustomer) return revisionCrumbs(place, last);
  return [{ label: place.job.title, to: href("/your-job/:jobId", { jobId: place.job.id }) }, { label: `${place.part.name} ${place.revision.ordinal}`, to: href("/revisions/:revisionId", { revisionId: place.revision.id }) }, { label: last }];
}
