import { isRouteErrorResponse, Link } from "react-router";
import { PlainPage, SheetHeading } from "#app/components/sheet.tsx";

interface Fault {
  title: string;
  whatToDo: string;
}

const faults: Record<number, Fault> = {
  400: { title: "This could not be read", whatToDo: "Something in the request was not as the page sends it. Go back, load the page again and repeat the step." },
  401: { title: "Please sign in first", whatToDo: "Your session has ended. Sign in, and you come back to where you were." },
  403: { title: "This is not open to you", whatToDo: "Your role in this shop does not reach here. Ask an owner of the shop if it should." },
  404: { title: "There is nothing at this address", whatToDo: "It may have moved, been mistyped, or belong to a shop you are not in. Look for it from the start page." },
  405: { title: "This address takes no such request", whatToDo: "Go back and use the buttons of the page." },
  409: { title: "Something changed meanwhile", whatToDo: "Nothing was saved. Go back, load the page again, look at what changed and repeat the step." },
  410: { title: "This link has ended", whatToDo: "Links to a job stop when the shop ends them or their time is up. Ask the shop for a new one." },
  413: { title: "That file is too large", whatToDo: "The upload page says how large a file may be. Nothing was stored." },
  429: { title: "Too many tries", whatToDo: "Wait a few minutes, then try again. Nothing was lost." },
  503: { title: "Not ready just now", whatToDo: "A part of the product can't be reached. Try again in a minute; what was saved is safe." },
};

const broke: Fault = {
  title: "Something broke on our side",
  whatToDo: "What was saved before is safe. Go back and try once more; if it happens again, tell the shop's owner what you were doing.",
};

/** What happened and what to do, from anything that was thrown; never a stack. */
export function faultOf(error: unknown): Fault & { status: number; said: string | null; requestId: string | null } {
  if (!isRouteErrorResponse(error)) return { ...broke, status: 500, said: null, requestId: null };
  const fault = faults[error.status] ?? (error.status < 500 ? faults[400]! : broke);
  // Words of our own routes ride in the response's data; those of a 5xx are for the log.
  const data: unknown = error.data;
  const field = (name: string) => (typeof data === "object" && data !== null && name in data ? String((data as Record<string, unknown>)[name]) : null);
  const text = typeof data === "string" && data.length < 300 && !data.startsWith("Error:") ? data : field("message");
  return { ...fault, status: error.status, said: error.status < 500 ? text || null : null, requestId: field("requestId") };
}

export interface ErrorPageProps {
  error: unknown;
  /** Inside a frame: only what lies in the sheet. */
  framed?: boolean;
  homeTo?: string;
}

/** The one way a fault looks. */
export function ErrorPage({ error, framed, homeTo = "/" }: ErrorPageProps) {
  const fault = faultOf(error);
  const ways = (
    <div className="flex flex-wrap items-center gap-x-6 gap-y-2">
      <Link to={fault.status === 401 ? "/sign-in" : homeTo} className="button button-primary">
        {fault.status === 401 ? "Sign in" : "To the start page"}
      </Link>
      <span className="text-soft">
        {fault.status}
        {fault.requestId && `, request ${fault.requestId}`}
      </span>
    </div>
  );
  const lead = (
    <>
      {fault.said && <span className="block text-ink">{fault.said}</span>}
      {fault.whatToDo}
    </>
  );
  if (framed) {
    return (
      <div className="px-4 py-8 sm:px-7">
        <SheetHeading title={fault.title} lead={lead} />
        {ways}
      </div>
    );
  }
  return (
    <PlainPage title={fault.title} lead={lead}>
      {ways}
    </PlainPage>
  );
}
