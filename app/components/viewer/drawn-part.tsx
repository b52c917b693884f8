import { useThree } from "@react-three/fiber";
import { useEffect, useMemo } from "react";
import { BackSide, BufferGeometry, DoubleSide, MeshBasicMaterial, Vector2, type Plane } from "three";
import { LineMaterial } from "three/examples/jsm/lines/LineMaterial.js";
import { LineSegments2 } from "three/examples/jsm/lines/LineSegments2.js";
import type { LineSegmentsGeometry } from "three/examples/jsm/lines/LineSegmentsGeometry.js";
import type { FaceGroup, ViewModel } from "./load-model.ts";
import type { SheetColours } from "./sheet-colours.ts";

/** px, as thin ink lines are on the sheet. */
const EDGE_PX = 1.4;
const OUTLINE_PX = 1.1;

/** What was picked: a face of a group. */
export interface PickedFace {
  group: FaceGroup;
  /** Index into the group's faces; null for all of them. */
  face: number | null;
}

export interface DrawnPartProps {
  model: ViewModel;
  colours: SheetColours;
  edges: boolean;
  /** What lies on the wrong side is not drawn. */
  cut: Plane | null;
  /** It encloses a volume: also where it is cut, nothing but outsides and the lining are in sight. */
  closed: boolean;
  picked: PickedFace | null;
}

/** The part: matt faces, its edges in ink, and an outline where a round face turns away. */
export function DrawnPart({ model, colours, edges, cut, closed, picked }: DrawnPartProps) {
  const clippingPlanes = useMemo(() => (cut ? [cut] : []), [cut]);
  const outline = useOutline(colours, clippingPlanes);
  const pickedGeometry = usePickedGeometry(picked);
  return (
    <group>
      {model.groups.map(({ geometry }, index) => (
        <mesh key={index} geometry={geometry} renderOrder={4}>
          <meshLambertMaterial color="white" side={cut ? DoubleSide : undefined} clippingPlanes={clippingPlanes} polygonOffset polygonOffsetFactor={1} polygonOffsetUnits={1} />
        </mesh>
      ))}
      {/* The outline would fill an inside that stays in sight with ink. */}
      {edges && (!cut || closed) && model.groups.map(({ geometry }, index) => <mesh key={index} geometry={geometry} material={outline} renderOrder={4} />)}
      {edges && model.edges && <InkLines geometry={model.edges} colour={colours.ink} width={EDGE_PX} clippingPlanes={clippingPlanes} />}
      {pickedGeometry && (
        <mesh geometry={pickedGeometry} renderOrder={5}>
          <meshBasicMaterial color={colours.blue} transparent opacity={0.55} side={DoubleSide} clippingPlanes={clippingPlanes} depthWrite={false} />
        </mesh>
      )}
    </group>
  );
}

export interface InkLinesProps {
  geometry: LineSegmentsGeometry;
  colour: SheetColours["ink"];
  /** px */
  width: number;
  clippingPlanes?: Plane[];
}

const uncut: Plane[] = [];

/** Lines of a width in pixels, which plain WebGL lines don't have. */
export function InkLines({ geometry, colour, width, clippingPlanes = uncut }: InkLinesProps) {
  const lines = useMemo(() => new LineSegments2(geometry, new LineMaterial({ clipping: true })), [geometry]);
  useEffect(() => () => lines.material.dispose(), [lines]);
  const invalidate = useThree((state) => state.invalidate);
  useEffect(() => {
    lines.material.color.copy(colour);
    lines.material.linewidth = width;
    lines.material.clippingPlanes = clippingPlanes;
    lines.renderOrder = 6;
    invalidate();
  }, [lines, colour, width, clippingPlanes, invalidate]);
  return <primitive object={lines} />;
}

/** Back faces pushed out by a pixel on the screen: what remains in sight of them is the outline. */
function useOutline(colours: SheetColours, clippingPlanes: Plane[]): MeshBasicMaterial {
  const invalidate = useThree((state) => state.invalidate);
  const size = useThree((state) => state.size);
  const { material, share } = useMemo(() => {
    const share = { value: new Vector2() };
    const material = new MeshBasicMaterial({ side: BackSide });
    material.onBeforeCompile = (shader) => {
      shader.uniforms.outlineShare = share;
      shader.vertexShader = `uniform vec2 outlineShare;\n${shader.vertexShader}`.replace(
        "#include <project_vertex>",
        `#include <project_vertex>
         vec2 away = (normalMatrix * normal).xy;
         gl_Position.xy += away / max(length(away), 1e-4) * outlineShare * gl_Position.w;`,
      );
    };
    return { material, share };
  }, []);
  useEffect(() => () => material.dispose(), [material]);
  useEffect(() => {
    share.value.set((2 * OUTLINE_PX) / size.width, (2 * OUTLINE_PX) / size.height);
    material.color.copy(colours.ink);
    material.clippingPlanes = clippingPlanes;
    invalidate();
  }, [material, share, colours, size, clippingPlanes, invalidate]);
  return material;
}

/** The triangles of one face, on the vertices of its group. */
function usePickedGeometry(picked: PickedFace | null): BufferGeometry | null {
  const geometry = useMemo(() => {
    if (!picked) return null;
    const own = new BufferGeometry();
    own.setAttribute("position", picked.group.geometry.getAttribute("position"));
    own.setIndex(picked.group.geometry.getIndex());
    const face = picked.face === null ? undefined : picked.group.faces[picked.face];
    if (face) own.setDrawRange(...face);
    return own;
  }, [picked]);
  return geometry;
}

