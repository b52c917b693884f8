import { Form, useLocation } from "react-router";
import type { LengthUnit } from "#app/components/measure.tsx";

export type Theme = "paper" | "blueprint" | "system";

export interface PreferenceValues {
  theme: Theme;
  units: LengthUnit;
}

const themes: { value: Theme; label: string }[] = [
  { value: "paper", label: "paper" },
  { value: "blueprint", label: "blueprint" },
  { value: "system", label: "as the device" },
];

const units: { value: LengthUnit; label: string }[] = [
  { value: "mm", label: "mm" },
  { value: "in", label: "in" },
];

/** Units and theme, each a row of words; posts `units` or `theme` with `returnTo` to /preferences. */
export function Preferences(now: PreferenceValues) {
  return (
    <div className="flex flex-wrap gap-x-8">
      <Choice name="units" legend="Lengths in" options={units} current={now.units} />
      <Choice name="theme" legend="Drawn as" options={themes} current={now.theme} />
    </div>
  );
}

interface ChoiceProps {
  name: "units" | "theme";
  legend: string;
  options: { value: string; label: string }[];
  current: string;
}

function Choice({ name, legend, options, current }: ChoiceProps) {
  const { pathname, search } = useLocation();
  return (
    <Form method="post" action="/preferences" preventScrollReset className="flex items-center gap-x-1" aria-label={legend}>
      <input type="hidden" name="returnTo" value={pathname + search} />
      <span className="pr-1">{legend}</span>
      {options.map(({ value, label }) => (
        <button
          key={value}
          name={name}
          value={value}
          aria-pressed={value === current}
          className="min-h-11 min-w-8 px-1.5 text-soft hover:text-blue aria-pressed:font-semibold aria-pressed:text-ink aria-pressed:underline aria-pressed:decoration-blue aria-pressed:decoration-2 aria-pressed:underline-offset-4"
        >
          {label}
        </button>
      ))}
    </Form>
  );
}
