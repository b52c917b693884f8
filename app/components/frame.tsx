import { useEffect, useRef, type FocusEvent, type KeyboardEvent, type ReactNode } from "react";
import { Form, Link, NavLink, useLocation } from "react-router";
import { Mark } from "#app/components/mark.tsx";
import { Preferences, type PreferenceValues } from "#app/components/preferences.tsx";

export interface NavWord {
  to: string;
  label: string;
  /** Current only on exactly this address. */
  end?: boolean;
}

export interface Crumb {
  label: string;
  /** Left out on the page one is on. */
  to?: string;
}

/** One line of the person menu: a link, or a small form that posts. */
export type MenuEntry =
  | { label: string; to: string }
  | { label: string; postTo: string; fields?: Record<string, string>; current?: boolean };

export interface FrameProps {
  nav: NavWord[];
  crumbs?: Crumb[];
  /** Who looks, as it is said on the top line: "Ines Barrow, designer". */
  person?: string;
  /** Shops, account, sign out. */
  menu?: MenuEntry[];
  /** Address of the search page; without it there is no search box. */
  searchAction?: string;
  searchValue?: string;
  searchLabel?: string;
  preferences: PreferenceValues;
  homeTo?: string;
  children: ReactNode;
}

/**
 * The frame of every page behind the door: top line, the ruled border of the sheet,
 * and the line of small print below it with the units and theme.
 */
export function Frame(props: FrameProps) {
  const { nav, crumbs = [], person, menu = [], searchAction, preferences, homeTo = "/", children } = props;
  const { key } = useLocation();
  const search = searchAction ? <SearchBox action={searchAction} value={props.searchValue} label={props.searchLabel} /> : null;
  return (
    <div className="flex min-h-dvh flex-col px-2 pb-2 sm:px-3">
      <SkipLink />
      <header className="no-print flex min-h-16 flex-wrap items-center gap-x-6 gap-y-1 px-1.5 py-2">
        <Link to={homeTo} className="flex min-h-11 items-center gap-2.5 text-lg font-semibold">
          <Mark />
          Spotblue
        </Link>
        <nav aria-label="Main" className="hidden lg:block">
          <NavWords nav={nav} className="flex gap-x-5" />
        </nav>
        {crumbs.length > 0 && <Crumbs crumbs={crumbs} />}
        <div className="ml-auto hidden items-center gap-x-6 lg:flex">
          {search}
          {person && <PersonMenu key={key} person={person} menu={menu} />}
        </div>
        <details key={`small ${key}`} className="group ml-auto lg:hidden open:w-full open:border-t open:border-rule">
          <summary className="flex min-h-11 items-center justify-end px-2 font-semibold">
            <span className="group-open:hidden">Menu</span>
            <span className="hidden group-open:inline">Close the menu</span>
          </summary>
          <div className="grid gap-4 pb-4">
            {search}
            <nav aria-label="Main, folded">
              <NavWords nav={nav} className="grid" />
            </nav>
            {person && (
              <div className="border-t border-rule pt-2">
                <p className="font-label text-label font-medium text-soft">{person}</p>
                <MenuEntries menu={menu} />
              </div>
            )}
          </div>
        </details>
      </header>
      <main id="sheet" tabIndex={-1} className="sheet-border flex flex-1 flex-col focus:outline-none">
        <div className="sheet flex flex-1 flex-col">{children}</div>
      </main>
      <footer className="no-print flex flex-wrap items-center justify-between gap-x-8 px-1.5 pt-1 font-label text-label font-medium text-soft">
        <p>Results here are a check, not an approval.</p>
        <Preferences {...preferences} />
      </footer>
    </div>
  );
}

export function SkipLink() {
  return (
    <a href="#sheet" className="button button-primary absolute left-2 top-2 z-20 -translate-y-24 focus:translate-y-0">
      Go to the sheet
    </a>
  );
}

function NavWords({ nav, className }: { nav: NavWord[]; className: string }) {
  return (
    <ul className={className}>
      {nav.map(({ to, label, end }) => (
        <li key={to}>
          <NavLink
            to={to}
            end={end}
            className="flex min-h-11 items-center text-soft hover:text-ink aria-[current=page]:font-semibold aria-[current=page]:text-ink"
          >
            {label}
          </NavLink>
        </li>
      ))}
    </ul>
  );
}

function Crumbs({ crumbs }: { crumbs: Crumb[] }) {
  return (
    <nav aria-label="Where you are" className="order-last w-full min-w-0 xl:order-none xl:w-auto xl:border-l xl:border-rule xl:pl-6">
      <ol className="flex flex-wrap gap-x-4 xl:gap-x-5">
        {crumbs.map(({ label, to }, index) => (
          <li key={`${index} ${label}`} className="min-w-0">
            {to ? (
              <Link to={to} className="flex min-h-8 items-center text-soft hover:text-ink hover:underline hover:underline-offset-4 xl:min-h-11">
                {label}
              </Link>
            ) : (
              <span aria-current="page" className="flex min-h-8 items-center font-semibold xl:min-h-11">
                {label}
              </span>
            )}
          </li>
        ))}
      </ol>
    </nav>
  );
}

function SearchBox({ action, value, label = "Find a job, part, person" }: { action: string; value?: string; label?: string }) {
  const box = useRef<HTMLInputElement>(null);
  useEffect(() => {
    const onKey = (event: globalThis.KeyboardEvent) => {
      // Two boxes exist (wide and folded); only the one that is drawn answers.
      if ((event.ctrlKey || event.metaKey) && event.key.toLowerCase() === "k" && box.current?.offsetParent) {
        event.preventDefault();
        box.current.focus();
        box.current.select();
      }
    };
    document.addEventListener("keydown", onKey);
    return () => document.removeEventListener("keydown", onKey);
  }, []);
  return (
    <Form method="get" action={action} role="search" className="flex min-h-11 items-center border border-rule bg-sheet focus-within:outline-2 focus-within:outline-blue lg:w-72">
      <input ref={box} type="search" name="q" defaultValue={value} aria-label={label} placeholder={label} className="min-w-0 flex-1 bg-transparent px-3 py-2 focus:outline-none" />
      <kbd aria-hidden="true" className="hidden pr-3 font-label text-label font-medium text-soft lg:block">
        Ctrl K
      </kbd>
    </Form>
  );
}

/** Closes on Escape and when the focus leaves it; a new page mounts it anew, closed. */
function PersonMenu({ person, menu }: { person: string; menu: MenuEntry[] }) {
  const details = useRef<HTMLDetailsElement>(null);
  const close = () => details.current?.removeAttribute("open");
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key !== "Escape" || !details.current?.open) return;
    close();
    details.current.querySelector("summary")?.focus();
  };
  const onBlur = (event: FocusEvent) => {
    if (event.relatedTarget && !details.current?.contains(event.relatedTarget)) close();
  };
  if (menu.length === 0) return <span className="font-label text-label font-semibold">{person}</span>;
  return (
    <details ref={details} className="relative" onKeyDown={onKeyDown} onBlur={onBlur}>
      <summary className="flex min-h-11 items-center gap-2 font-label text-label font-semibold hover:text-blue">
        {person}
        <svg viewBox="0 0 8 5" className="w-2" aria-hidden="true">
          <path d="M0 0h8L4 5Z" className="fill-current" />
        </svg>
      </summary>
      <div className="absolute right-0 z-10 w-64 border-[1.5px] border-ink bg-sheet px-4 py-1">
        <MenuEntries menu={menu} />
      </div>
    </details>
  );
}

function MenuEntries({ menu }: { menu: MenuEntry[] }) {
  return (
    <ul className="divide-y divide-hairline">
      {menu.map((entry) => (
        <li key={entry.label}>
          {"to" in entry ? (
            <Link to={entry.to} className="flex min-h-11 items-center hover:text-blue">
              {entry.label}
            </Link>
          ) : (
            <Form method="post" action={entry.postTo}>
              {Object.entries(entry.fields ?? {}).map(([name, value]) => (
                <input key={name} type="hidden" name={name} value={value} />
              ))}
              <button aria-current={entry.current || undefined} className="flex min-h-11 w-full items-center text-left hover:text-blue aria-[current]:font-semibold">
                {entry.label}
              </button>
            </Form>
          )}
        </li>
      ))}
    </ul>
  );
}
