import { href } from "react-router";
import type { Crumb } from "#app/components/frame.tsx";

/** Job, part and revision as the words above a page; `last` is the page itself. */
export function revisionCrumbs(place: { job: { id: string; number: string; title: string }; part: { name: string }; revision: { id: string; ordinal: number } }, last?: string): Crumb[] {
  const { job, part, revision } = place;
  return [
    { label: `${job.number} ${job.title}`, to: href("/jobs/:jobId", { jobId: job.id }) },
    { label: `${part.name} ${revision.ordinal}`, to: last ? href("/revisions/:revisionId", { revisionId: revision.id }) : undefined },
    ...(last ? [{ label: last }] : []),
  ];
}
