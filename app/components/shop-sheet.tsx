import type { ReactNode } from "react";
import { NavLink } from "react-router";
import { Sheet } from "#app/components/sheet.tsx";

const rooms = [
  { to: "/shop/instruments", label: "Instruments" },
  { to: "/shop/printers", label: "Printers" },
  { to: "/shop/presets", label: "Print presets" },
  { to: "/shop/materials", label: "Materials" },
  { to: "/shop/questions", label: "Questions" },
];

/** What the shop works with: a row of words over each of its pages. */
export function ShopSheet({ owner, children }: { owner: boolean; children: ReactNode }) {
  return (
    <Sheet
      top={
        <nav aria-label="The shop" className="overflow-x-auto px-4 sm:px-7">
          <ul className="flex gap-x-6">
            {[...rooms, ...(owner ? [{ to: "/shop/settings", label: "Settings" }] : [])].map(({ to, label }) => (
              <li key={to}>
                <NavLink to={to} className="-mb-px flex min-h-11 items-center whitespace-nowrap border-b-[2.5px] border-transparent text-soft hover:text-ink aria-[current=page]:border-ink aria-[current=page]:font-semibold aria-[current=page]:text-ink">
                  {label}
                </NavLink>
              </li>
            ))}
          </ul>
        </nav>
      }
    >
      {children}
    </Sheet>
  );
}
