import type { ReactNode } from "react";
import { Mark } from "#app/components/mark.tsx";
import { Preferences, type PreferenceValues } from "#app/components/preferences.tsx";
import { SkipLink } from "#app/components/frame.tsx";

export interface SheetProps {
  /** Runs along the top of the sheet, such as the revision tree. */
  top?: ReactNode;
  /** Inputs of a calculation. */
  left?: ReactNode;
  right?: ReactNode;
  /** Names the right column for those who can't see it. */
  rightLabel?: string;
  /** A band under the main area: differences, holes. */
  band?: ReactNode;
  /** Lower right on a desk, on top on a phone. */
  titleBlock?: ReactNode;
  /** A drawing or model fills the main area to its lines. */
  bleed?: boolean;
  children: ReactNode;
}

/** What lies inside the border: a main area, and columns and bands divided by hairlines. */
export function Sheet({ top, left, right, rightLabel = "Beside", band, titleBlock, bleed, children }: SheetProps) {
  const second = Boolean(right || titleBlock);
  const columns = left
    ? second
      ? "lg:grid-cols-[20rem_minmax(0,1fr)_22rem]"
      : "lg:grid-cols-[20rem_minmax(0,1fr)]"
    : second
      ? "lg:grid-cols-[minmax(0,1fr)_24.25rem]"
      : "lg:grid-cols-[minmax(0,1fr)]";
  // Rows: top, main, what the band is taller than the title block, title block.
  return (
    <div className={`grid flex-1 grid-cols-[minmax(0,1fr)] content-start lg:content-stretch lg:grid-rows-[auto_1fr_auto_auto] ${columns}`}>
      {titleBlock && <div className="lg:col-start-[-2] lg:col-end-[-1] lg:row-start-4">{titleBlock}</div>}
      {top && <div className="border-b border-rule lg:col-span-full lg:row-start-1">{top}</div>}
      {left && <div className="border-b border-rule p-5 lg:row-start-2 lg:border-b-0 lg:border-r lg:px-6 lg:py-7">{left}</div>}
      <div
        className={`min-w-0 lg:row-start-2 ${bleed ? "" : "px-4 py-6 sm:px-7 lg:py-7"} ${left ? "lg:col-start-2" : "lg:col-start-1"} ${titleBlock && !right ? "lg:col-end-[-1]" : ""}`}
      >
        {children}
      </div>
      {right && (
        <aside aria-label={rightLabel} className="border-t border-rule px-4 py-6 sm:px-6 lg:col-start-[-2] lg:col-end-[-1] lg:row-start-2 lg:row-end-4 lg:border-l lg:border-t-0 lg:py-6">
          {right}
        </aside>
      )}
      {band && (
        <div className={`min-w-0 border-t border-rule px-4 py-5 sm:px-5 lg:col-start-1 lg:row-start-3 lg:row-end-5 lg:py-3 ${second ? "lg:col-end-[-2]" : "lg:col-end-[-1]"}`}>{band}</div>
      )}
    </div>
  );
}

export interface SheetHeadingProps {
  /** A sentence where a person decides, a name where they look. */
  title: ReactNode;
  lead?: ReactNode;
  actions?: ReactNode;
}

export function SheetHeading({ title, lead, actions }: SheetHeadingProps) {
  return (
    <div className="mb-5 flex flex-wrap items-end justify-between gap-x-8 gap-y-3">
      <div className="min-w-0">
        <h1 className="text-sentence text-balance">{title}</h1>
        {lead && <p className="mt-1 max-w-prose text-soft">{lead}</p>}
      </div>
      {actions && <div className="flex flex-wrap items-center gap-x-5 gap-y-2">{actions}</div>}
    </div>
  );
}

export interface SectionProps {
  title: ReactNode;
  lead?: ReactNode;
  actions?: ReactNode;
  /** An ink line above, as between the parts of a right column. */
  ruled?: boolean;
  id?: string;
  children: ReactNode;
}

export function Section({ title, lead, actions, ruled, id, children }: SectionProps) {
  return (
    <section id={id} className={`mt-8 first:mt-0 ${ruled ? "border-t-[1.5px] border-ink pt-5 first:border-t-0 first:pt-0" : ""}`}>
      <div className="mb-2 flex flex-wrap items-baseline justify-between gap-x-6">
        <h2 className="text-lg">{title}</h2>
        {actions}
      </div>
      {lead && <p className="mb-3 max-w-prose text-soft">{lead}</p>}
      {children}
    </section>
  );
}

export interface PlainPageProps {
  title: ReactNode;
  lead?: ReactNode;
  /** Smaller words below the sheet's content, such as another way to sign in. */
  foot?: ReactNode;
  preferences?: PreferenceValues;
  children?: ReactNode;
}

/** A small sheet with nothing around it: sign-in, guest links, faults before anybody is known. */
export function PlainPage({ title, lead, foot, preferences, children }: PlainPageProps) {
  return (
    <div className="flex min-h-dvh flex-col items-center px-2 pb-4 pt-6 sm:pt-[10vh]">
      <SkipLink />
      <p className="mb-4 flex items-center gap-2.5 text-lg font-semibold">
        <Mark />
        Spotblue
      </p>
      <main id="sheet" tabIndex={-1} className="sheet-border w-full max-w-[32rem] focus:outline-none">
        <div className="sheet px-5 py-7 sm:px-8">
          <h1 className="text-sentence text-balance">{title}</h1>
          {lead && <p className="mt-1 text-soft">{lead}</p>}
          {children && <div className="mt-6">{children}</div>}
          {foot && <div className="mt-7 border-t border-hairline pt-4 text-soft">{foot}</div>}
        </div>
      </main>
      {preferences && (
        <footer className="pt-2 font-label text-label font-medium text-soft">
          <Preferences {...preferences} />
        </footer>
      )}
    </div>
  );
}
