import { pressKey, type KeypadKey } from "#app/components/keypad-entry.ts";
import type { LengthUnit } from "#app/components/measure.tsx";

export interface KeypadProps {
  /** The reading as it is being typed. */
  value: string;
  onChange: (value: string) => void;
  unit: LengthUnit;
  onUnitChange: (unit: LengthUnit) => void;
  onPhoto?: () => void;
  /** Left out inside a form: the key then submits it. */
  onSave?: () => void;
  saveText?: string;
  photoText?: string;
  saving?: boolean;
}

const figures: KeypadKey[][] = [
  ["7", "8", "9"],
  ["4", "5", "6"],
  ["1", "2", "3"],
];

const key = "flex min-h-16 items-center justify-center border border-ink bg-sheet text-2xl font-semibold active:bg-band select-none touch-manipulation";
const word = "text-base leading-5";

/** Big keys for gloves at the bench; holds no state of its own. */
export function Keypad({ value, onChange, unit, onUnitChange, onPhoto, onSave, saveText = "Save, next", photoText = "Photo", saving }: KeypadProps) {
  const press = (pressed: KeypadKey) => () => onChange(pressKey(value, pressed));
  const other: LengthUnit = unit === "mm" ? "in" : "mm";
  return (
    <div role="group" aria-label="Keys" className="grid grid-cols-4 gap-2">
      {figures[0]!.map((figure) => (
        <button key={figure} type="button" className={key} onClick={press(figure)}>
          {figure}
        </button>
      ))}
      <button type="button" className={`${key} ${word}`} onClick={press("delete")} disabled={value === ""}>
        Delete
      </button>
      {figures[1]!.map((figure) => (
        <button key={figure} type="button" className={key} onClick={press(figure)}>
          {figure}
        </button>
      ))}
      {onPhoto ? (
        <button type="button" className={`${key} ${word}`} onClick={onPhoto}>
          {photoText}
        </button>
      ) : (
        <span />
      )}
      {figures[2]!.map((figure) => (
        <button key={figure} type="button" className={key} onClick={press(figure)}>
          {figure}
        </button>
      ))}
      <button
        type={onSave ? "button" : "submit"}
        onClick={onSave}
        aria-disabled={saving || undefined}
        className={`${key} ${word} row-span-2 !bg-ink text-sheet aria-disabled:!bg-rule`}
      >
        <span className="px-2 text-center">{saving ? "Saving …" : saveText}</span>
      </button>
      <button type="button" className={key} onClick={press(".")} aria-label="point">
        .
      </button>
      <button type="button" className={key} onClick={press("0")}>
        0
      </button>
      <button type="button" className={`${key} ${word}`} onClick={() => onUnitChange(other)} aria-label={`Reading in ${unit}; change to ${other}`}>
        <span>
          <span className={unit === "mm" ? "underline decoration-blue decoration-2 underline-offset-4" : "font-normal text-soft"}>mm</span>
          {" / "}
          <span className={unit === "in" ? "underline decoration-blue decoration-2 underline-offset-4" : "font-normal text-soft"}>in</span>
        </span>
      </button>
    </div>
  );
}
