import { Sheet, SheetHeading } from "#app/components/sheet.tsx";
import { requireCan } from "#app/http/context.server.ts";
import type { Route } from "./+types/today.ts";

export const meta: Route.MetaFunction = () => [{ title: "Today · Spotblue" }];

export function loader({ context }: Route.LoaderArgs) {
  const viewer = requireCan(context, "today:read");
  return { name: viewer.name };
}

export default function TodayPage() {
  return (
    <Sheet>
      <SheetHeading title="Nothing waits on you" />
    </Sheet>
  );
}
