import { Link } from "react-router";
import { Day } from "#app/components/day.tsx";
import { GateMark } from "#app/components/gate-marks.tsx";

export interface ListedCallout {
  id: string;
  number: number;
  body: string;
  to: string;
  spot: { x: number; y: number } | null;
  byName: string;
  at: Date | string;
  replies: number;
  closed: boolean;
  fromCustomer: boolean;
  /** Kept from the customer; never true in a customer's response. */
  internal: boolean;
  assignee: string | null;
}

/** Callouts by number: their words, who put them, whether they are open. */
export function CalloutList({ callouts, where = false }: { callouts: ListedCallout[]; where?: boolean }) {
  if (callouts.length === 0) return null;
  return (
    <ul className="divide-y divide-hairline border-y border-hairline">
      {callouts.map((callout) => (
        <li key={callout.id} className={callout.internal ? "inside-rule pl-4" : ""}>
          <Link to={callout.to} className="grid min-h-14 grid-cols-[1.75rem_minmax(0,1fr)_auto] items-start gap-x-3 py-3 hover:bg-wash">
            <b className="text-blue">{callout.number}</b>
            <span className="min-w-0">
              <span className="line-clamp-3 [overflow-wrap:anywhere]">{callout.body}</span>
              <span className="block text-sm text-soft">
                {callout.byName}
                {callout.fromCustomer && ", the customer"}, <Day at={callout.at} />
                {where && (callout.spot ? ", on a photo" : ", on the model")}
                {callout.replies > 0 && `, ${callout.replies === 1 ? "one answer" : `${callout.replies} answers`}`}
                {callout.assignee && `, given to ${callout.assignee}`}
                {callout.internal && ", inside the shop only"}
              </span>
            </span>
            <GateMark state={callout.closed ? "met" : "open"} word={callout.closed ? "closed" : "open"} />
          </Link>
        </li>
      ))}
    </ul>
  );
}
