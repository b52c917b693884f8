import type { ReactNode } from "react";
import { Length } from "#app/components/measure.tsx";
import type { Axis } from "#app/geometry/section-line.ts";
import type { CameraHandle } from "./camera-rig.tsx";
import type { Section } from "./section-cut.tsx";
import { standardViews, type StandardView } from "./view-pose.ts";

export type Tool = "view" | "turn" | "section" | "measure" | "faces" | "callout";

interface WordProps {
  onClick: () => void;
  pressed?: boolean;
  children: ReactNode;
}

/** A tool is a word; the one in hand is underlined. */
function Word({ onClick, pressed, children }: WordProps) {
  return (
    <button
      type="button"
      onClick={onClick}
      aria-pressed={pressed}
      className={`relative inline-flex min-h-11 items-center lg:min-h-9 font-label text-label font-semibold hover:text-blue ${pressed === false || pressed === undefined ? "text-soft" : "after:absolute after:inset-x-0 after:bottom-2 after:h-0.5 lg:after:bottom-1 after:bg-blue"}`}
    >
      {children}
    </button>
  );
}

const row = "flex flex-wrap items-center gap-x-4 sm:gap-x-5";

export interface ViewerToolsProps {
  tools: readonly Tool[];
  tool: Tool;
  onTool: (tool: Tool) => void;
  more?: ReactNode;
}

const toolWords: Record<Tool, string> = { view: "View", turn: "Turn", section: "Section", measure: "Measure", faces: "Faces", callout: "Place a callout" };

export function ViewerTools({ tools, tool, onTool, more }: ViewerToolsProps) {
  return (
    <div role="group" aria-label="Tools of the view" className={row}>
      {tools.map((one) => (
        <Word key={one} pressed={one === tool} onClick={() => onTool(one)}>
          {toolWords[one]}
        </Word>
      ))}
      {more}
    </div>
  );
}

export interface ViewWordsProps {
  camera: () => CameraHandle | null;
  edges: boolean;
  onEdges: (edges: boolean) => void;
}

const views = Object.keys(standardViews) as StandardView[];

export function ViewWords({ camera, edges, onEdges }: ViewWordsProps) {
  return (
    <div role="group" aria-label="From where" className={row}>
      {views.map((view) => (
        <Word key={view} onClick={() => camera()?.show(view)}>
          {view.replace(/^./, (letter) => letter.toUpperCase())}
        </Word>
      ))}
      <Word onClick={() => camera()?.fit()}>Fit</Word>
      <Word pressed={edges} onClick={() => onEdges(!edges)}>
        Edges
      </Word>
    </div>
  );
}

const TURN_DEG = 15;
const SHIFT = 0.12;
const ZOOM = 1.25;

/** The same as dragging, in steps. */
export function TurnWords({ camera }: Pick<ViewWordsProps, "camera">) {
  const words: [string, (handle: CameraHandle) => void][] = [
    ["Turn left", (handle) => handle.turn(TURN_DEG, 0)],
    ["right", (handle) => handle.turn(-TURN_DEG, 0)],
    ["up", (handle) => handle.turn(0, -TURN_DEG)],
    ["down", (handle) => handle.turn(0, TURN_DEG)],
    ["Move left", (handle) => handle.shift(-SHIFT, 0)],
    ["right", (handle) => handle.shift(SHIFT, 0)],
    ["up", (handle) => handle.shift(0, SHIFT)],
    ["down", (handle) => handle.shift(0, -SHIFT)],
    ["Closer", (handle) => handle.zoom(ZOOM)],
    ["Farther", (handle) => handle.zoom(1 / ZOOM)],
  ];
  const spoken = (word: string, index: number) => (word === word.toLowerCase() ? `${index < 4 ? "Turn" : "Move"} ${word}` : word);
  return (
    <div role="group" aria-label="Turn and move" className={row}>
      {words.map(([word, act], index) => (
        <Word key={index} onClick={() => camera() && act(camera()!)}>
          <span aria-hidden="true">{word}</span>
          <span className="sr-only">{spoken(word, index)}</span>
        </Word>
      ))}
    </div>
  );
}

export interface SectionWordsProps {
  section: Section;
  range: { low: number; high: number };
  onSection: (section: Section) => void;
  middleOf: (axis: Axis) => number;
}

const axisWords: [Axis, string][] = [[0, "Across x"], [1, "Across y"], [2, "Across z"]];

export function SectionWords({ section, range, onSection, middleOf }: SectionWordsProps) {
  return (
    <div role="group" aria-label="Section" className={row}>
      {axisWords.map(([axis, word]) => (
        <Word key={axis} pressed={axis === section.axis} onClick={() => onSection({ ...section, axis, at: middleOf(axis), flipped: axis === 1 })}>
          {word}
        </Word>
      ))}
      <label className="flex min-h-11 min-w-48 flex-1 items-center gap-3">
        <span className="sr-only">Where the plane stands</span>
        <input
          type="range"
          min={range.low}
          max={range.high}
          step="any"
          value={section.at}
          onChange={(event) => onSection({ ...section, at: Number(event.currentTarget.value) })}
          className="min-w-0 flex-1"
        />
        <span className="min-w-20 text-right">
          <Length mm={section.at} digits={2} />
        </span>
      </label>
      <Word onClick={() => onSection({ ...section, flipped: !section.flipped })}>Other side</Word>
    </div>
  );
}
