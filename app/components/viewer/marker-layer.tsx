import { useImperativeHandle, useRef, type Ref } from "react";
import { Link } from "react-router";
import { placeLabels } from "./marker-layout.ts";
import type { Point } from "./view-pose.ts";

export interface Marker {
  id: string;
  number: number;
  point_mm: Point;
  label: string;
  href: string;
}

export interface LayerFrame {
  toScreen: (point: Point) => { x: number; y: number };
  isHidden: (point: Point) => boolean;
  width: number;
  height: number;
  /** Between which the part lies, px from the left. */
  part: { left: number; right: number };
}

export interface MarkerLayerHandle {
  draw(frame: LayerFrame): void;
}

export interface MarkerLayerProps {
  markers: readonly Marker[];
  /** One or two picked points; two have a dimension line between them. */
  measured: readonly Point[];
  measuredText: string;
  /** A point that is being placed. */
  placed: Point | null;
  handle: Ref<MarkerLayerHandle>;
}

/** Narrower than this the words of a callout stand below the view only. */
const WORDS_FROM_PX = 560;

const move = (element: Element | null | undefined, x: number, y: number) => {
  if (element instanceof HTMLElement || element instanceof SVGElement) element.style.transform = `translate(${x}px, ${y}px)`;
};

/** Callouts and dimensions over the view. It is moved by the frame loop, not by React. */
export function MarkerLayer({ markers, measured, measuredText, placed, handle }: MarkerLayerProps) {
  const root = useRef<HTMLDivElement>(null);
  useImperativeHandle(handle, () => ({
    draw(frame) {
      const layer = root.current;
      if (!layer) return;
      const find = <E extends Element>(name: string) => [...layer.querySelectorAll<E>(`[data-${name}]`)];
      const spots = markers.map(({ point_mm }) => frame.toScreen(point_mm));
      const labels = frame.width >= WORDS_FROM_PX ? placeLabels(spots, frame) : spots.map(() => null);
      const [spotElements, wordElements, lineElements] = [find<HTMLElement>("spot"), find<HTMLElement>("words"), find<SVGElement>("leader")];
      spots.forEach((spot, i) => {
        const label = labels[i];
        move(spotElements[i], spot.x, spot.y);
        spotElements[i]?.toggleAttribute("data-behind", frame.isHidden(markers[i]!.point_mm));
        wordElements[i]?.toggleAttribute("hidden", !label);
        if (!label) return lineElements[i]?.setAttribute("d", "");
        move(wordElements[i], label.x, label.y);
        if (wordElements[i]) wordElements[i].dataset.side = label.side;
        const shelf = label.side === "left" ? -150 : 150;
        lineElements[i]?.setAttribute("d", `M${spot.x} ${spot.y}L${label.x} ${label.y}h${shelf}`);
      });

      const ends = measured.map(frame.toScreen);
      find<SVGElement>("end").forEach((end, i) => ends[i] && move(end, ends[i].x, ends[i].y));
      const [from, to] = ends;
      if (from && to) {
        find<SVGElement>("dimension").forEach((line) => line.setAttribute("d", `M${from.x} ${from.y}L${to.x} ${to.y}`));
        find<HTMLElement>("amount").forEach((amount) => move(amount, (from.x + to.x) / 2, (from.y + to.y) / 2));
      }
      if (placed) {
        const at = frame.toScreen(placed);
        find<SVGElement>("placed").forEach((spot) => move(spot, at.x, at.y));
      }
    },
  }));
  return (
    <div ref={root} className="pointer-events-none absolute inset-0 overflow-hidden">
      <svg className="absolute inset-0 size-full" aria-hidden="true">
        {markers.map(({ id }) => (
          <path key={id} data-leader="" className="fill-none stroke-blue" strokeWidth="1.5" />
        ))}
        {measured.length === 2 && <path data-dimension="" className="stroke-ink" strokeWidth="1.5" />}
        {measured.map((_, i) => (
          <circle key={i} data-end="" r="4.5" className="fill-sheet stroke-ink" strokeWidth="2" />
        ))}
        {placed && <circle data-placed="" r="9" className="fill-sheet stroke-blue" strokeWidth="2.5" />}
      </svg>
      {measured.length === 2 && (
        <span data-amount="" aria-hidden="true" className="absolute left-0 top-0">
          <span className="absolute bottom-1.5 left-1.5 whitespace-nowrap bg-sheet px-1.5 font-semibold">{measuredText}</span>
        </span>
      )}
      {markers.map(({ id, number, label, href }) => (
        <div key={id}>
          <Link
            to={href}
            data-spot=""
            aria-label={`Callout ${number}: ${label}`}
            className="group pointer-events-auto absolute -left-[22px] -top-[22px] flex size-11 items-center justify-center"
          >
            <span className="flex size-[1.375rem] items-center justify-center rounded-full border-2 border-blue bg-sheet text-xs font-semibold text-blue group-hover:bg-blue group-hover:text-sheet group-data-behind:border-dashed">
              {number}
            </span>
          </Link>
          <p data-words="" hidden aria-hidden="true" className="group absolute left-0 top-0">
            <span className="absolute bottom-0.5 line-clamp-1 w-[150px] text-sm/5 font-semibold group-data-[side=left]:right-0 group-data-[side=right]:left-0">{label}</span>
          </p>
        </div>
      ))}
    </div>
  );
}
