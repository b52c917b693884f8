import { Canvas, useFrame, useThree } from "@react-three/fiber";
import { useEffect, useMemo, useRef, useState, type KeyboardEvent, type PointerEvent, type ReactNode } from "react";
import { Vector3, type Camera, type Plane } from "three";
import { Length, useUnits } from "#app/components/measure.tsx";
import { lengthIn, numberText } from "#app/components/measure-text.ts";
import { ProgressLine } from "#app/components/progress-line.tsx";
import type { Axis } from "#app/geometry/section-line.ts";
import { CameraRig, type CameraHandle } from "./camera-rig.tsx";
import { DrawnPart, type PickedFace } from "./drawn-part.tsx";
import { FaceWords } from "./face-words.tsx";
import { loadModel, ViewFault, type ViewModel } from "./load-model.ts";
import { MarkerLayer, type LayerFrame, type Marker, type MarkerLayerHandle } from "./marker-layer.tsx";
import { isHidden, pickAt, toScreen, type Pick } from "./pick.ts";
import { cutOf, SectionCut, type Section } from "./section-cut.tsx";
import { useSheetColours } from "./sheet-colours.ts";
import type { Point } from "./view-pose.ts";
import { SectionWords, TurnWords, ViewerTools, ViewWords, type Tool } from "./viewer-tools.tsx";

export interface ModelStageProps {
  meshUrl: string;
  /** "Filler flange, revision 4" */
  name: string;
  closed: boolean;
  markers: readonly Marker[];
  onPickPoint?: (point_mm: [number, number, number], label: string) => void;
  /** Further words beside the tools. */
  more?: ReactNode;
  note?: ReactNode;
  onFault: (reason: string) => void;
}

const tools: readonly Tool[] = ["view", "turn", "section", "measure", "faces"];

const noModel = { model: null, share: 0 as number | null };

/** Fetches the view mesh, and gives its memory back when another one or none is looked at. */
function useModel(meshUrl: string, onFault: (reason: string) => void): { model: ViewModel | null; share: number | null } {
  const [state, setState] = useState<{ model: ViewModel | null; share: number | null }>(noModel);
  const fault = useRef(onFault);
  useEffect(() => {
    fault.current = onFault;
  });
  useEffect(() => {
    const ended = new AbortController();
    let loaded: ViewModel | null = null;
    setState(noModel);
    loadModel(meshUrl, ended.signal, (share) => setState({ model: null, share })).then(
      (model) => {
        loaded = model;
        if (ended.signal.aborted) model.dispose();
        else setState({ model, share: 1 });
      },
      (reason: unknown) => {
        if (ended.signal.aborted) return;
        if (!(reason instanceof ViewFault)) throw reason;
        fault.current(reason.message);
      },
    );
    return () => {
      ended.abort();
      loaded?.dispose();
    };
  }, [meshUrl]);
  return state;
}

interface StageHandle {
  camera: Camera;
  size: { width: number; height: number };
  invalidate: () => void;
}

/** The drawn view of a part with its tools; only ever in a browser. */
export default function ModelStage(props: ModelStageProps) {
  const { meshUrl, name, closed, markers, onPickPoint, more, note, onFault } = props;
  const { model, share } = useModel(meshUrl, onFault);
  const colours = useSheetColours();
  const units = useUnits();
  const [tool, setTool] = useState<Tool>(onPickPoint ? "callout" : "view");
  const [edges, setEdges] = useState(true);
  const [section, setSection] = useState<Section | null>(null);
  const [picked, setPicked] = useState<PickedFace | null>(null);
  const [measured, setMeasured] = useState<Pick[]>([]);
  const [placed, setPlaced] = useState<Pick | null>(null);
  const camera = useRef<CameraHandle>(null);
  const layer = useRef<MarkerLayerHandle>(null);
  const stage = useRef<StageHandle | null>(null);
  const pressed = useRef<{ x: number; y: number } | null>(null);
  const lost = useRef<(reason: string) => void>(onFault);
  useEffect(() => {
    lost.current = onFault;
    // The context is given back on purpose when the view goes.
    return () => void (lost.current = () => {});
  }, [onFault]);

  const cut = useMemo(() => section && cutOf(section), [section]);
  useEffect(() => {
    setPicked(null);
    setMeasured([]);
    setPlaced(null);
    setSection(null);
  }, [model]);

  function choose(next: Tool) {
    setTool(next);
    if (next !== "measure") setMeasured([]);
    if (next === "section" && model && !section) setSection({ axis: 0, at: middle(model, 0), flipped: false });
    if (next === "view") setSection(null);
  }

  function pick(spot: { x: number; y: number }) {
    if (!model || !stage.current) return;
    const found = pickAt(model, stage.current.camera, spot, stage.current.size, cut);
    setPicked(found && { group: found.group, face: found.face });
    if (!found) return;
    if (tool === "measure") setMeasured((before) => (before.length === 1 ? [...before, found] : [found]));
    if (tool === "callout" && onPickPoint) {
      setPlaced(found);
      onPickPoint(found.point_mm, found.group.label);
    }
  }

  function release({ clientX, clientY, currentTarget }: PointerEvent<HTMLDivElement>) {
    const from = pressed.current;
    pressed.current = null;
    // A drag turns the part; only a press that stayed where it was picks.
    if (!from || Math.hypot(clientX - from.x, clientY - from.y) > 5) return;
    const { left, top } = currentTarget.getBoundingClientRect();
    pick({ x: clientX - left, y: clientY - top });
  }

  function press(event: KeyboardEvent<HTMLDivElement>) {
    if (event.target !== event.currentTarget || event.ctrlKey || event.metaKey || event.altKey) return;
    const act = keys(event.key, event.shiftKey);
    if (act && camera.current) act(camera.current);
    else if (event.key === "Enter" && stage.current) pick({ x: stage.current.size.width / 2, y: stage.current.size.height / 2 });
    else return;
    event.preventDefault();
  }

  const distance = measured.length === 2 ? distanceOf(measured[0]!.point_mm, measured[1]!.point_mm) : null;
  const amount = distance === null ? "" : `${numberText(lengthIn(distance, units), units === "mm" ? 2 : 4)} ${units}`;
  const size = model?.box;
  return (
    <div className="flex h-full min-h-0 flex-1 flex-col lg:sticky lg:top-2 lg:max-h-[max(36rem,calc(100dvh-11rem))]">
      <div
        role="application"
        aria-roledescription="view of a model"
        aria-label={`${name}. Arrow keys turn it, with shift they move it, plus and minus bring it closer and farther, Enter picks what is in the middle.`}
        tabIndex={0}
        onKeyDown={press}
        onPointerDown={({ clientX, clientY, isPrimary }) => (pressed.current = isPrimary ? { x: clientX, y: clientY } : null)}
        onPointerUp={release}
        className="group/stage relative min-h-[20rem] flex-1 touch-none bg-[radial-gradient(closest-side,var(--wash),transparent)] -outline-offset-2"
      >
        <div className="absolute inset-0">
          <Canvas orthographic frameloop="demand" flat dpr={[1, 2]} gl={{ antialias: true, stencil: true, alpha: true }} camera={{ up: [0, 0, 1], position: [0, -1, 0] }} onCreated={({ gl }) => {
              gl.localClippingEnabled = true;
              gl.domElement.addEventListener("webglcontextlost", () => lost.current("The view was lost: the graphics of this computer were reset."), { once: true });
            }}>
            <Reporter
              stage={stage}
              onFrame={(frame) => layer.current?.draw(frame)}
              model={model}
              cut={cut}
              changes={[markers, measured, placed]}
            />
            {model && (
              <>
                <CameraRig model={model} colours={colours} handle={camera} />
                <DrawnPart model={model} colours={colours} edges={edges} cut={cut} closed={closed} picked={picked} />
                {section && cut && <SectionCut model={model} section={section} cut={cut} colours={colours} closed={closed} />}
              </>
            )}
          </Canvas>
        </div>
        {model && <MarkerLayer handle={layer} markers={markers} measured={measured.map(({ point_mm }) => point_mm)} measuredText={amount} placed={placed?.point_mm ?? null} />}
        <Crosshair />
        {note && <p className="pointer-events-none absolute right-4 top-4 font-label text-label font-medium text-soft">{note}</p>}
        {!model && (
          <div className="absolute inset-x-4 top-1/2 mx-auto max-w-xs -translate-y-1/2">
            <ProgressLine label="Loading the view" share={share} />
          </div>
        )}
      </div>
      <div className="sticky bottom-0 bg-sheet px-4 pb-2 sm:px-5">
        <p role="status" className="min-h-6 text-[0.9375rem]">
          <Said tool={tool} picked={picked} measured={measured} amount={amount} error_mm={model?.error_mm ?? 0} closed={closed} placed={placed !== null} />
        </p>
        {tool === "view" && <ViewWords camera={() => camera.current} edges={edges} onEdges={setEdges} />}
        {tool === "turn" && <TurnWords camera={() => camera.current} />}
        {tool === "section" && section && size && (
          <SectionWords section={section} onSection={setSection} middleOf={(axis) => (model ? middle(model, axis) : 0)} range={{ low: size.min.getComponent(section.axis), high: size.max.getComponent(section.axis) }} />
        )}
        {tool === "faces" && model && <FaceWords model={model} picked={picked} onPick={setPicked} />}
        <ViewerTools tools={onPickPoint ? [...tools, "callout"] : tools} tool={tool} onTool={choose} more={more} />
      </div>
    </div>
  );
}

const TURN_DEG = 15;

/** What a key asks of the camera. */
function keys(key: string, shift: boolean): ((camera: CameraHandle) => void) | null {
  switch (key) {
    case "ArrowLeft":
      return (camera) => (shift ? camera.shift(-0.1, 0) : camera.turn(TURN_DEG, 0));
    case "ArrowRight":
      return (camera) => (shift ? camera.shift(0.1, 0) : camera.turn(-TURN_DEG, 0));
    case "ArrowUp":
      return (camera) => (shift ? camera.shift(0, 0.1) : camera.turn(0, -TURN_DEG));
    case "ArrowDown":
      return (camera) => (shift ? camera.shift(0, -0.1) : camera.turn(0, TURN_DEG));
    case "+":
    case "=":
      return (camera) => camera.zoom(1.25);
    case "-":
    case "_":
      return (camera) => camera.zoom(1 / 1.25);
    case "Home":
      return (camera) => camera.fit();
    default:
      return null;
  }
}

function middle(model: ViewModel, axis: Axis): number {
  return model.box.getCenter(new Vector3()).getComponent(axis);
}

function distanceOf(a: Point, b: Point): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

interface ReporterProps {
  stage: { current: StageHandle | null };
  model: ViewModel | null;
  cut: Plane | null;
  onFrame: (frame: LayerFrame) => void;
  /** When one of these changes, one frame is drawn. */
  changes: readonly unknown[];
}

/** Tells the layer above the drawing where things are, each time a frame is drawn. */
function Reporter({ stage, model, cut, onFrame, changes }: ReporterProps) {
  const camera = useThree((state) => state.camera);
  const size = useThree((state) => state.size);
  const invalidate = useThree((state) => state.invalidate);
  useEffect(() => {
    stage.current = { camera, size, invalidate };
  }, [stage, camera, size, invalidate]);
  useEffect(() => invalidate(), [invalidate, ...changes]);
  useFrame(() => {
    if (!model) return;
    camera.updateMatrixWorld();
    const onScreen = (point: Point) => toScreen(camera, size, point);
    const across = corners(model).map((corner) => onScreen(corner).x);
    onFrame({ toScreen: onScreen, isHidden: (point) => isHidden(model, camera, point, cut), width: size.width, height: size.height, part: { left: Math.min(...across), right: Math.max(...across) } });
  });
  return null;
}

function corners({ box: { min, max } }: ViewModel): Point[] {
  return [min.x, max.x].flatMap((x) => [min.y, max.y].flatMap((y) => [min.z, max.z].map((z): Point => [x, y, z])));
}

/** Where Enter picks; only while the keyboard has the view. */
function Crosshair() {
  return (
    <svg viewBox="0 0 24 24" className="pointer-events-none absolute left-1/2 top-1/2 hidden size-6 -translate-x-1/2 -translate-y-1/2 stroke-blue group-focus-visible/stage:block" strokeWidth="1.5" aria-hidden="true">
      <path d="M12 0v24M0 12h24" />
    </svg>
  );
}

interface SaidProps {
  tool: Tool;
  picked: PickedFace | null;
  measured: readonly Pick[];
  amount: string;
  error_mm: number;
  closed: boolean;
  placed: boolean;
}

/** What the tool in hand has to say. */
function Said({ tool, picked, measured, amount, error_mm, closed, placed }: SaidProps) {
  const label = picked && <b className="inline-block first-letter:uppercase">{picked.group.label}</b>;
  if (tool === "measure") {
    const [from, to] = measured;
    if (!from) return <span className="text-soft">Press a first point; edges near by are caught.</span>;
    if (!to) return <>First point {from.snapped ? "on an edge" : "taken"}, {from.group.label}. Press the second.</>;
    const [x, y, z] = [0, 1, 2].map((axis) => Math.abs(to.point_mm[axis]! - from.point_mm[axis]!)) as [number, number, number];
    return (
      <>
        <b>{amount}</b>; along x <Length mm={x} digits={2} bare />, y <Length mm={y} digits={2} bare />, z <Length mm={z} digits={2} bare />
        <span className="text-soft">, read from the view, which lies within <Length mm={error_mm} digits={3} /> of the model</span>
      </>
    );
  }
  if (tool === "callout") return placed ? <>On {label}.</> : <span className="text-soft">Press the spot that the callout is about.</span>;
  if (tool === "section" && !closed) return <span className="text-soft">The mesh is not closed, so the cut shows its outline without lining.</span>;
  return label ?? <span className="text-soft">Press a face to read what it is.</span>;
}
