import { href, Link, useSearchParams } from "react-router";
import { CalloutList } from "#app/components/callout-list.tsx";
import { Empty } from "#app/components/empty.tsx";
import { LinkButton } from "#app/components/link-button.tsx";
import { useLive } from "#app/components/live.tsx";
import { Section, Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { shownCrumbs } from "#app/components/shown-crumbs.ts";
import { listCallouts } from "#app/data/callouts.server.ts";
import { listFitPhotos, listRevisionPhotos } from "#app/data/photos.server.ts";
import { idParam, inShop } from "#app/data/scope.server.ts";
import { can } from "#app/domain/permissions.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadShownPlace } from "#app/services/callout-pages.server.ts";
import { calloutView } from "#app/services/callout-views.server.ts";
import type { Route } from "./+types/callouts.ts";
import type { PageHandle } from "./signed-in.tsx";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Callouts: ${loaderData?.place.part.name} ${loaderData?.place.revision.ordinal} · Spotblue` }];
export const handle: PageHandle<Route.ComponentProps["loaderData"]> = { crumbs: ({ place }) => shownCrumbs(place, "Callouts") };

export async function loader({ params, context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "callout:read");
  return inShop(viewer, async (tx) => {
    const place = await loadShownPlace(tx, viewer, idParam(params.revisionId));
    const photos = [...(await listFitPhotos(tx, place.revision.id)), ...(await listRevisionPhotos(tx, place.revision.id))].filter(({ ready }) => ready);
    return {
      place,
      callouts: (await listCallouts(tx, viewer, { revisionId: place.revision.id })).map((callout) => calloutView(viewer, callout)),
      photos: photos.map(({ fileId, name }) => ({ fileId, name })),
      inside: can(viewer.roles, "callout:internal"),
    };
  });
}

const states = { open: "open", closed: "closed", all: "all" } as const;
const sides = { all: "whoever reads it", customer: "the customer reads", internal: "the shop only" } as const;

export default function CalloutsPage({ loaderData }: Route.ComponentProps) {
  const { place, callouts, photos, inside } = loaderData;
  useLive(place.job.id);
  const [params] = useSearchParams();
  const openCount = callouts.filter(({ closed }) => !closed).length;
  const state = (params.get("state") ?? "all") as keyof typeof states;
  const side = (params.get("for") ?? "all") as keyof typeof sides;
  const shown = callouts.filter(({ closed, internal }) => (state === "all" || closed === (state === "closed")) && (side === "all" || internal === (side === "internal")));
  const title = callouts.length === 0 ? "No callout yet" : openCount === 0 ? "Every callout is closed" : openCount === 1 ? "One callout is open" : `${openCount} callouts are open`;
  return (
    <Sheet
      rightLabel="Put a callout"
      right={
        <Section title="Put a callout" lead={photos.length > 0 ? "Touch the photo, then the spot you mean." : inside ? undefined : "There is no photo yet to put one on."}>
          <ul className="grid grid-cols-2 gap-2">
            {photos.map(({ fileId, name }) => (
              <li key={fileId}>
                <Link to={href("/photos/:fileId", { fileId })} className="block border border-hairline hover:border-blue">
                  <img src={href("/files/:fileId/:kind", { fileId, kind: "thumbnail" })} alt={`Photo: ${name}`} loading="lazy" className="aspect-[4/3] w-full object-cover" />
                </Link>
              </li>
            ))}
          </ul>
          {inside && (
            <p className="mt-4">
              <LinkButton to={`${href("/revisions/:revisionId/callouts/new", { revisionId: place.revision.id })}?on=model`} wide>
                On a point of the model
              </LinkButton>
            </p>
          )}
        </Section>
      }
    >
      <SheetHeading title={title} lead={place.revision.sealed ? "The revision was released; a conversation goes on." : undefined} />
      {callouts.length > 0 && (
        <nav aria-label="Which callouts" className="mb-2 flex flex-wrap gap-x-8">
          <Filter name="state" options={states} current={state} params={params} />
          {inside && <Filter name="for" options={sides} current={side} params={params} />}
        </nav>
      )}
      {callouts.length === 0 ? (
        <Empty>A callout is a note fixed to a spot of a photo{inside ? " or of the model" : ""}, with its answers.</Empty>
      ) : shown.length === 0 ? (
        <Empty>None of them is like that.</Empty>
      ) : (
        <CalloutList callouts={shown} where />
      )}
    </Sheet>
  );
}

function Filter({ name, options, current, params }: { name: string; options: Record<string, string>; current: string; params: URLSearchParams }) {
  return (
    <ul className="flex flex-wrap gap-x-4">
      {Object.entries(options).map(([value, label]) => {
        const next = new URLSearchParams(params);
        if (value === "all") next.delete(name);
        else next.set(name, value);
        return (
          <li key={value}>
            <Link to={`?${next}`} aria-current={value === current || undefined} preventScrollReset className="flex min-h-11 items-center text-soft hover:text-blue aria-[current]:font-semibold aria-[current]:text-ink aria-[current]:underline aria-[current]:decoration-blue aria-[current]:decoration-2 aria-[current]:underline-offset-4">
              {label}
            </Link>
          </li>
        );
      })}
    </ul>
  );
}
