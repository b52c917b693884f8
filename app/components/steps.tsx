export interface Step {
  label: string;
  state: "done" | "now" | "ahead";
}

const said = { done: "done", now: "now", ahead: "still ahead" };

/** How far a job has come, in the customer's words. */
export function Steps({ steps, label = "How far it is" }: { steps: Step[]; label?: string }) {
  return (
    <ol aria-label={label} className="mb-6 grid sm:auto-cols-fr sm:grid-flow-col">
      {steps.map(({ label: name, state }) => (
        <li
          key={name}
          aria-current={state === "now" ? "step" : undefined}
          className={`border-l-[3px] py-1 pl-3 sm:border-l-0 sm:border-t-[3px] sm:py-0 sm:pl-0 sm:pr-3 sm:pt-2.5 ${state === "done" ? "border-met" : state === "now" ? "border-blue font-semibold" : "border-hairline text-soft"}`}
        >
          {name}
          <span className="sr-only">, {said[state]}</span>
        </li>
      ))}
    </ol>
  );
}
