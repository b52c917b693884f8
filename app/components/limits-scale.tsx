import { useUnits } from "#app/components/measure.tsx";
import { placeOnScale, scaleText } from "#app/components/limits-scale-layout.ts";
import { lengthIn, numberText } from "#app/components/measure-text.ts";

export interface LimitsScaleProps {
  /** mm (or the unit named); null or left out: no limit on that side. */
  lower?: number | null;
  upper?: number | null;
  /** Earlier readings of the same characteristic come first, the newest last. */
  readings?: number[];
  /** Expanded uncertainty; left out where simple acceptance decides, and no band is undecided. */
  uncertainty?: number | null;
  state?: "met" | "open" | "failed";
  /** Another unit than lengths: "°", "N". Such a scale does not follow the page's unit. */
  unit?: string;
  digits?: number;
}

const HEIGHT = 78;
const LINE = 44;

/** Limits drawn to scale, with the undecided bands and the reading on them. */
export function LimitsScale({ lower = null, upper = null, readings = [], uncertainty = null, state = "open", unit, digits = 2 }: LimitsScaleProps) {
  const units = useUnits();
  const scale = placeOnScale({ lower, upper, readings, uncertainty });
  const inch = unit === undefined && units === "in";
  const text = (value: number) => numberText(inch ? lengthIn(value, "in") : value, inch ? digits + 2 : digits);
  const shownUnit = unit ?? units;
  const colour = state === "failed" ? "fill-failed stroke-failed" : state === "met" ? "fill-met stroke-met" : "fill-ink stroke-ink";
  return (
    <svg
      viewBox={`0 0 ${scale.width} ${HEIGHT}`}
      role="img"
      aria-label={scaleText({ lower, upper, readings, uncertainty }, (value) => `${text(value)} ${shownUnit}`)}
      className="block w-full max-w-md font-label text-[13px] font-semibold"
    >
      <rect x={scale.band.from} y={LINE - 13} width={scale.band.to - scale.band.from} height="26" className="fill-band" />
      <path d={`M4 ${LINE}H${scale.width - 4}`} className="stroke-ink" strokeWidth="1.5" />
      {scale.limits.map(({ at, value, anchor }) => (
        <g key={value}>
          {scale.undecided > 0 && (
            <rect x={at - scale.undecided} y={LINE - 13} width={scale.undecided * 2} height="26" className="fill-none stroke-soft" strokeWidth="1.3" strokeDasharray="3 2.5" />
          )}
          <path d={`M${at} ${LINE - 19}V${LINE + 19}`} className="stroke-ink" strokeWidth="2" />
          <text x={at} y="17" textAnchor={anchor} className="fill-soft">
            {text(value)}
          </text>
        </g>
      ))}
      {scale.undecided > 0 && uncertainty !== null && scale.limits[0] && (
        <text x={scale.limits[0].at} y={HEIGHT - 3} textAnchor="middle" className="fill-soft">
          undecided ± {text(uncertainty)}
        </text>
      )}
      {scale.readings.map(({ at, off, last }, index) =>
        last ? (
          <path key={index} d={markerPath(at, off)} className={colour} strokeWidth="1" strokeLinejoin="miter" />
        ) : (
          <path key={index} d={`M${at} ${LINE - 8}v16`} className="stroke-soft" strokeWidth="2" />
        ),
      )}
    </svg>
  );
}

/** A pointer on the line; off the scale it points out of the side where the reading lies. */
function markerPath(at: number, off: -1 | 0 | 1): string {
  if (off === 0) return `M${at} ${LINE}l-7-16h14Z`;
  return `M${at + off * 9} ${LINE - 11}l${-off * 16}-6v12Z`;
}
