import { useId, useRef, useState, type KeyboardEvent, type MouseEvent } from "react";
import { moveSpot, spotText, type Spot } from "#app/components/spot.ts";

export interface PhotoSpot extends Spot {
  id: string;
  /** The number in the circle. */
  number: number;
  /** What it is about, for readers: "Is the hinge right?" */
  label: string;
  href?: string;
  closed?: boolean;
}

export interface PhotoWithSpotsProps {
  src: string;
  alt: string;
  /** Pixels of the picture, so that the page does not jump when it arrives. */
  width: number;
  height: number;
  spots: PhotoSpot[];
  /** Lets a person put a new spot; sends fields `x` and `y`, fractions from the left and the top. */
  pick?: { number: number; start?: Spot | null };
}

/** A picture with numbered callouts; a new one is put by a click, by arrow keys, or by its two numbers. */
export function PhotoWithSpots({ src, alt, width, height, spots, pick }: PhotoWithSpotsProps) {
  const [spot, setSpot] = useState<Spot | null>(pick?.start ?? null);
  const picture = useRef<HTMLDivElement>(null);
  const id = useId();

  const put = (event: MouseEvent) => {
    if ((event.target as Element).closest("a")) return;
    const box = picture.current!.getBoundingClientRect();
    setSpot(moveSpot({ x: (event.clientX - box.left) / box.width, y: (event.clientY - box.top) / box.height }, 0, 0));
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const step = event.shiftKey ? 0.05 : 0.01;
    const way = { ArrowLeft: [-step, 0], ArrowRight: [step, 0], ArrowUp: [0, -step], ArrowDown: [0, step] }[event.key];
    if (!way || event.target !== event.currentTarget) return;
    event.preventDefault();
    setSpot(moveSpot(spot ?? { x: 0.5, y: 0.5 }, way[0]!, way[1]!));
  };

  return (
    <figure>
      <div
        ref={picture}
        className={`relative ${pick ? "cursor-crosshair touch-manipulation" : ""}`}
        {...(pick ? { onClick: put, onKeyDown, tabIndex: 0, role: "group", "aria-label": `${alt}. Arrow keys move the spot, with Shift faster.`, "aria-describedby": id } : {})}
      >
        <img src={src} alt={alt} width={width} height={height} className="block h-auto w-full bg-wash" />
        <svg className="absolute inset-0 size-full overflow-visible">
          {spots.map((each) => (
            <SpotMark key={each.id} {...each} />
          ))}
          {pick && spot && <NewSpot spot={spot} number={pick.number} />}
        </svg>
      </div>
      {pick && (
        <figcaption className="mt-2 text-sm text-soft">
          <p id={id} aria-live="polite">
            {spot ? spotText(spot) : "Touch the picture where you mean, or use the arrow keys."}
          </p>
          <details>
            <summary className="flex min-h-11 items-center font-medium text-blue">Put it by numbers, 0 to 1</summary>
            <div className="flex flex-wrap gap-x-6 gap-y-2">
              <SpotNumber name="x" label="from the left" value={spot?.x} onChange={(x) => setSpot({ y: 0.5, ...spot, x })} />
              <SpotNumber name="y" label="from the top" value={spot?.y} onChange={(y) => setSpot({ x: 0.5, ...spot, y })} />
            </div>
          </details>
        </figcaption>
      )}
    </figure>
  );
}

function SpotMark({ x, y, number, label, href, closed }: PhotoSpot) {
  const mark = (
    <>
      <circle cx={percent(x)} cy={percent(y)} r="22" className="fill-transparent" />
      <circle cx={percent(x)} cy={percent(y)} r="15" className={`stroke-sheet ${closed ? "fill-soft" : "fill-blue"}`} strokeWidth="2.5" />
      <text x={percent(x)} y={percent(y)} dy="0.35em" textAnchor="middle" className="fill-sheet text-[15px] font-semibold">
        {number}
      </text>
    </>
  );
  const name = `Callout ${number}${closed ? ", closed" : ""}: ${label}`;
  return href ? (
    <a href={href} aria-label={name}>
      {mark}
    </a>
  ) : (
    <g role="img" aria-label={name}>
      {mark}
    </g>
  );
}

function NewSpot({ spot, number }: { spot: Spot; number: number }) {
  const [x, y] = [percent(spot.x), percent(spot.y)];
  return (
    <g aria-hidden="true" className="pointer-events-none">
      <line x1={x} x2={x} y1="0" y2="100%" className="stroke-sheet" strokeWidth="1" strokeDasharray="12 4 3 4" />
      <line x1="0" x2="100%" y1={y} y2={y} className="stroke-sheet" strokeWidth="1" strokeDasharray="12 4 3 4" />
      <circle cx={x} cy={y} r="15" className="fill-attention stroke-sheet" strokeWidth="2.5" />
      <text x={x} y={y} dy="0.35em" textAnchor="middle" className="fill-sheet text-[15px] font-semibold">
        {number}
      </text>
    </g>
  );
}

function SpotNumber({ name, label, value, onChange }: { name: string; label: string; value: number | undefined; onChange: (value: number) => void }) {
  return (
    <label className="flex items-center gap-2">
      {label}
      <input
        type="number"
        name={name}
        min="0"
        max="1"
        step="0.001"
        value={value ?? ""}
        onChange={(event) => Number.isFinite(event.target.valueAsNumber) && onChange(event.target.valueAsNumber)}
        className="min-h-11 w-20 border border-rule bg-transparent px-2 text-ink"
      />
    </label>
  );
}

function percent(fraction: number): string {
  return `${Math.round(fraction * 1e4) / 100}%`;
}
