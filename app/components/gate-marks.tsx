import { Link } from "react-router";
import { verdictSentence } from "#app/components/gate-words.ts";

export type GateState = "met" | "open" | "failed" | "conceded";

const order: Record<GateState, number> = { failed: 0, open: 1, conceded: 2, met: 3 };

/* Section lining at 45°, cut to the mark's frame by hand: a pattern would need an id of its own. */
const LINING = "M1 5.5 5.5 1M1 10 10 1M2.5 13 14.5 1M7 13 19 1M11.5 13 21 3.5M16 13 21 8";

/** The bare mark: solid, hollow, crossed or hatched. Say the word beside it. */
export function MarkShape({ state, className = "h-3.5 w-auto" }: { state: GateState; className?: string }) {
  const colour = state === "failed" ? "stroke-failed" : state === "met" ? "stroke-met fill-met" : "stroke-ink";
  return (
    <svg viewBox="0 0 22 14" className={`${className} ${colour} ${state === "met" ? "" : "fill-none"}`} aria-hidden="true" focusable="false">
      <rect x="0.75" y="0.75" width="20.5" height="12.5" strokeWidth="1.5" />
      {state === "failed" && <path d="M1 1 21 13M21 1 1 13" strokeWidth="1.5" />}
      {state === "conceded" && <path d={LINING} strokeWidth="1.3" />}
    </svg>
  );
}

/** The mark of a fault in a form or notice, the same cross as on the gate. */
export function CrossedMark({ className }: { className?: string }) {
  return <MarkShape state="failed" className={className} />;
}

export interface GateMarkProps {
  state: GateState;
  /** Another word than the state's own: "fails by 0.06". */
  word?: string;
  large?: boolean;
}

/** A mark with its word. */
export function GateMark({ state, word = state, large }: GateMarkProps) {
  return (
    <span className={`inline-flex items-center whitespace-nowrap font-semibold ${large ? "gap-2.5 text-xl" : "gap-2"} ${state === "failed" ? "text-failed" : state === "met" ? "text-met" : ""}`}>
      <MarkShape state={state} className={large ? "h-4 w-auto" : "h-3 w-auto"} />
      {word}
    </span>
  );
}

export interface GateLineView {
  /** Name of the line as it is written: "fit", "machinist". */
  line: string;
  state: GateState;
  /** What meets it, in a few words: "four pass, tightest 0.14 mm". */
  detail?: string;
  missing?: MissingView[];
}

export interface MissingView {
  /** What is missing, exactly. */
  what: string;
  /** Who can supply it. */
  who?: string;
  /** The one action, in words: "Record why"; left out for who may not do it. */
  act?: { label: string; to: string };
}

/** The nine lines as small marks in a row, read aloud as one sentence. */
export function GateRow({ lines }: { lines: Pick<GateLineView, "line" | "state">[] }) {
  return (
    <span role="img" aria-label={gateRowText(lines)} title={gateRowText(lines)} className="inline-flex gap-[3px] align-middle">
      {lines.map(({ line, state }) => (
        <MarkShape key={line} state={state} className="h-2.5 w-auto" />
      ))}
    </span>
  );
}

/** "Gate: 6 met; fit failed; customer, deposit open" */
export function gateRowText(lines: Pick<GateLineView, "line" | "state">[]): string {
  const named = (state: GateState) => lines.filter((each) => each.state === state).map((each) => each.line);
  const met = named("met").length;
  const others = (["failed", "open", "conceded"] as const).flatMap((state) => (named(state).length ? [`${named(state).join(", ")} ${state}`] : []));
  return `Gate: ${[met === lines.length ? `all ${met} met` : `${met} met`, ...others].join("; ")}`;
}

export interface GateVerdictProps {
  verdict: "go" | "no-go";
  lines: Pick<GateLineView, "line" | "state">[];
  /** What stands in the way beside the lines: set aside, replaced. */
  blocked?: MissingView[];
  level?: "h1" | "h2";
}

/** The verdict, as a sentence. */
export function GateVerdict({ verdict, lines, blocked = [], level: Heading = "h2" }: GateVerdictProps) {
  const { sentence, rest } = verdictSentence(verdict, lines, blocked.length);
  return (
    <div className="mb-3">
      <Heading className="text-sentence text-balance">{sentence}</Heading>
      {rest && <p className="text-soft">{rest}</p>}
      {blocked.map((missing) => (
        <Missing key={missing.what} missing={missing} />
      ))}
    </div>
  );
}

/** The lines, unmet first: what is missing, who supplies it, one action each. */
export function GateLines({ lines }: { lines: GateLineView[] }) {
  const sorted = [...lines].sort((a, b) => order[a.state] - order[b.state]);
  return (
    <ul className="divide-y divide-hairline">
      {sorted.map((line) => (
        <li key={line.line} aria-label={line.line} className="grid grid-cols-[auto_minmax(0,1fr)] items-start gap-x-3 py-2">
          <MarkShape state={line.state} className="mt-1.5 h-3.5 w-auto" />
          <div className="min-w-0">
            <p className="flex items-baseline justify-between gap-x-4">
              <span>
                <span className="inline-block font-semibold first-letter:uppercase">{line.line}</span>{" "}
                {line.detail && <span className="text-soft">{line.detail}</span>}
              </span>
              <span className={`font-label text-label font-medium ${line.state === "failed" ? "text-failed" : "text-soft"}`}>{line.state}</span>
            </p>
            {line.missing?.map((missing) => <Missing key={missing.what} missing={missing} />)}
          </div>
        </li>
      ))}
    </ul>
  );
}

function Missing({ missing: { what, who, act } }: { missing: MissingView }) {
  return (
    <div className="flex items-baseline justify-between gap-x-4">
      <p className="text-[0.9375rem] text-soft">
        {what}
        {who && !act && <span className="block">waits on the {who}</span>}
      </p>
      {act && (
        <Link to={act.to} className="word -my-2 shrink-0 py-2">
          {act.label}
        </Link>
      )}
    </div>
  );
}
