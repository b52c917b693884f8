import type { ReactNode } from "react";

export interface CautionView {
  code: string;
  title: string;
  text: string;
  /** The data it follows from, in words. */
  basis?: string;
}

export interface CautionsProps {
  cautions: CautionView[];
  title?: ReactNode;
  /** The form that says they were read, or who read them and when. */
  children?: ReactNode;
}

/** The cautions of a part, numbered like the notes on a drawing. */
export function Cautions({ cautions, title = "Cautions", children }: CautionsProps) {
  return (
    <section className="caution-rule pt-4">
      <h2 className="text-lg">{title}</h2>
      <ol className="mt-2 grid gap-x-10 gap-y-3 sm:grid-cols-2">
        {cautions.map(({ code, title: name, text, basis }, index) => (
          <li key={code} className="grid grid-cols-[1.5rem_minmax(0,1fr)]">
            <span className="font-semibold" aria-hidden="true">
              {index + 1}
            </span>
            <div>
              <p>
                <b>{name}.</b> {text}
              </p>
              {basis && <p className="text-sm text-soft">{basis}</p>}
            </div>
          </li>
        ))}
      </ol>
      {children && <div className="mt-4">{children}</div>}
    </section>
  );
}

/** The one sentence that stands below every calculation, gate and trial. */
export function CautionLine({ children }: { children?: ReactNode }) {
  return (
    <p className="max-w-prose text-sm text-soft">
      {children ?? "A check, not an approval: local codes, the suppliers' data and licensed engineering practice come first."}
    </p>
  );
}
