import { useThree } from "@react-three/fiber";
import { useEffect, useMemo } from "react";
import { AlwaysStencilFunc, BackSide, DecrementWrapStencilOp, FrontSide, IncrementWrapStencilOp, MeshBasicMaterial, NotEqualStencilFunc, Plane, ReplaceStencilOp, ShaderMaterial, Vector3, type WebGLRenderer } from "three";
import { LineSegmentsGeometry } from "three/examples/jsm/lines/LineSegmentsGeometry.js";
import { sectionLine, type Axis } from "#app/geometry/section-line.ts";
import { InkLines } from "./drawn-part.tsx";
import type { ViewModel } from "./load-model.ts";
import type { SheetColours } from "./sheet-colours.ts";

export interface Section {
  axis: Axis;
  /** mm */
  at: number;
  /** Keeps what lies above the plane instead of below. */
  flipped: boolean;
}

const unit: Record<Axis, [number, number, number]> = { 0: [1, 0, 0], 1: [0, 1, 0], 2: [0, 0, 1] };

/** three.js draws what lies on the side the plane's normal points to. */
export function cutOf({ axis, at, flipped }: Section): Plane {
  const sign = flipped ? 1 : -1;
  return new Plane(new Vector3(...unit[axis]).multiplyScalar(sign), -sign * at);
}

export interface SectionCutProps {
  model: ViewModel;
  section: Section;
  cut: Plane;
  colours: SheetColours;
  /** Only a closed part has an inside that can be lined. */
  closed: boolean;
}

/** The cut: its outline in ink, and section lining where the plane goes through material. */
export function SectionCut({ model, section, cut, colours, closed }: SectionCutProps) {
  const { axis, at } = section;
  const line = useMemo(() => {
    const segments = model.groups.flatMap(({ geometry }) => sectionLine(geometry.getAttribute("position").array, geometry.getIndex()!.array, axis, at));
    return segments.length === 0 ? null : new LineSegmentsGeometry().setPositions(segments);
  }, [model, axis, at]);
  useEffect(() => () => line?.dispose(), [line]);
  return (
    <group>
      {closed && <Lining model={model} section={section} cut={cut} colours={colours} />}
      {line && <InkLines geometry={line} colour={colours.ink} width={2} />}
    </group>
  );
}

/**
 * Counts in the stencil how often the plane's side is entered and left along each ray: where the
 * count is not zero the plane goes through material.
 */
function Lining({ model, section, cut, colours }: Omit<SectionCutProps, "closed">) {
  const counters = useMemo(
    () =>
      ([[BackSide, IncrementWrapStencilOp], [FrontSide, DecrementWrapStencilOp]] as const).map(
        ([side, op]) =>
          new MeshBasicMaterial({ side, colorWrite: false, depthWrite: false, depthTest: false, stencilWrite: true, stencilFunc: AlwaysStencilFunc, stencilFail: op, stencilZFail: op, stencilZPass: op, clippingPlanes: [cut] }),
      ),
    [cut],
  );
  useEffect(() => () => counters.forEach((counter) => counter.dispose()), [counters]);
  const hatching = useHatching(colours);
  const centre = model.box.getCenter(new Vector3());
  const size = model.box.getSize(new Vector3()).length() * 1.5;
  centre.setComponent(section.axis, section.at);
  const rotation: [number, number, number] = section.axis === 0 ? [0, Math.PI / 2, 0] : section.axis === 1 ? [Math.PI / 2, 0, 0] : [0, 0, 0];
  return (
    <>
      {model.groups.flatMap(({ geometry }, index) => counters.map((counter, side) => <mesh key={`${index}-${side}`} geometry={geometry} material={counter} renderOrder={1} />))}
      <mesh position={centre} rotation={rotation} material={hatching} renderOrder={2} onAfterRender={clearStencil}>
        <planeGeometry args={[size, size]} />
      </mesh>
    </>
  );
}

function clearStencil(renderer: WebGLRenderer): void {
  renderer.clearStencil();
}

/** Section lining at 45° on the paper, whatever way the cut faces. */
function useHatching(colours: SheetColours): ShaderMaterial {
  const ratio = useThree((state) => state.viewport.dpr);
  const material = useMemo(
    () =>
      new ShaderMaterial({
        side: 2,
        stencilWrite: true,
        stencilRef: 0,
        stencilFunc: NotEqualStencilFunc,
        stencilFail: ReplaceStencilOp,
        stencilZFail: ReplaceStencilOp,
        stencilZPass: ReplaceStencilOp,
        // Loses to the lines drawn in its own plane.
        polygonOffset: true,
        polygonOffsetFactor: 1,
        polygonOffsetUnits: 1,
        uniforms: { ground: { value: colours.sheet.clone() }, ink: { value: colours.ink.clone() }, step: { value: 8 } },
        vertexShader: "void main() { gl_Position = projectionMatrix * modelViewMatrix * vec4(position, 1.0); }",
        fragmentShader: `
          uniform vec3 ground; uniform vec3 ink; uniform float step;
          void main() {
            float across = mod(gl_FragCoord.x - gl_FragCoord.y, step);
            float line = 1.0 - smoothstep(0.10, 0.22, min(across, step - across) / step);
            gl_FragColor = vec4(mix(ground, ink, line * 0.8), 1.0);
            #include <colorspace_fragment>
          }`,
      }),
    [],
  );
  useEffect(() => () => material.dispose(), [material]);
  useEffect(() => {
    (material.uniforms.ground!.value as typeof colours.sheet).copy(colours.sheet);
    (material.uniforms.ink!.value as typeof colours.ink).copy(colours.ink);
    material.uniforms.step!.value = 8 * ratio;
  }, [material, colours, ratio]);
  return material;
}
