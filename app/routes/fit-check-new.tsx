import { Bench } from "#app/components/bench/bench.tsx";
import type { BenchProps } from "#app/components/bench/bench-types.ts";
import { listCharacteristics } from "#app/data/characteristics.server.ts";
import { listInstrumentsToPick } from "#app/data/fit-checks.server.ts";
import { listMatingParts } from "#app/data/mating-parts.server.ts";
import { findPrint } from "#app/data/prints.server.ts";
import { idParam, inShop, orNotFound } from "#app/data/scope.server.ts";
import { env } from "#app/env.server.ts";
import { requireCan } from "#app/http/context.server.ts";
import { loadRevisionPlace } from "#app/http/revision-page.server.ts";
import type { Route } from "./+types/fit-check-new.ts";

export const meta: Route.MetaFunction = ({ loaderData }) => [{ title: `Try print ${loaderData?.print.name} on · Spotblue` }];

/** All that the bench needs, at once: from then on it works without a connection. */
export async function loader({ params, context }: Route.LoaderArgs): Promise<BenchProps> {
  const viewer = requireCan(context, "fit-check:record");
  return inShop(viewer, async (tx) => {
    const print = orNotFound(await findPrint(tx, idParam(params.printId)));
    const place = await loadRevisionPlace(tx, print.revisionId);
    const characteristics = (await listCharacteristics(tx, place.part.id)).filter(({ id, provableOnPrint }) => provableOnPrint && (print.whole || print.proves.includes(id)));
    return {
      personKey: viewer.personId ?? viewer.guestLinkId ?? "",
      part: place.part.name,
      print: { id: print.id, name: print.name, words: print.whole ? "whole" : print.piece, spoiled: print.spoiled },
      sealed: place.revision.sealed ? String(place.revision.ordinal) : null,
      matingParts: (await listMatingParts(tx, place.job.id)).filter(({ setAside }) => !setAside).map(({ id, name, description }) => ({ id, name, description })),
      characteristics: characteristics.map(({ id, matingPartId, name, kind, lowerMm, upperMm, printLowerMm, printUpperMm, places, critical, question, method, photoRequired }) => ({ id, matingPartId, name, kind, lowerMm, upperMm, printLowerMm, printUpperMm, places, critical, question, method, photoRequired })),
      instruments: (await listInstrumentsToPick(tx)).map(({ id, name, uncertaintyMm, trust, calibratedUntil, checkedOn, checkedWith }) => ({ id, name, uncertaintyMm, trust, calibratedUntil, checkedOn, checkedWith })),
      limits: { modelMb: env.MAX_MODEL_MB, photoMb: env.MAX_PHOTO_MB },
      today: new Date().toISOString().slice(0, 10),
    };
  });
}

export default function FitCheckNewPage({ loaderData }: Route.ComponentProps) {
  return <Bench {...loaderData} />;
}
