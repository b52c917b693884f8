import { OrbitControls } from "@react-three/drei";
import { useFrame, useThree } from "@react-three/fiber";
import { useEffect, useImperativeHandle, useRef, type ComponentRef, type Ref } from "react";
import { type HemisphereLight, type OrthographicCamera, Vector3 } from "three";
import type { ViewModel } from "./load-model.ts";
import type { SheetColours } from "./sheet-colours.ts";
import { poseBetween, poseOf, screenAxes, standardViews, towardsEye, zoomToFit, type Point, type StandardView, type ViewPose } from "./view-pose.ts";

/** What keys and words ask of the camera. */
export interface CameraHandle {
  show(view: StandardView): void;
  fit(): void;
  /** Degrees around the part and above it. */
  turn(around_deg: number, above_deg: number): void;
  /** Moves the part across the view, as a share of its width and height. */
  shift(right: number, up: number): void;
  zoom(factor: number): void;
}

export interface CameraRigProps {
  model: ViewModel;
  colours: SheetColours;
  handle: Ref<CameraHandle>;
}

const TURN_MS = 320;

/** Orbit, pan and zoom by mouse and touch, and the light of a drawing: from the upper left, whatever way the part is turned. */
export function CameraRig({ model, colours, handle }: CameraRigProps) {
  const camera = useThree((state) => state.camera) as OrthographicCamera;
  const size = useThree((state) => state.size);
  const invalidate = useThree((state) => state.invalidate);
  const controls = useRef<ComponentRef<typeof OrbitControls>>(null);
  const light = useRef<HemisphereLight>(null);
  const turning = useRef<{ from: ViewPose; to: ViewPose; began: number } | null>(null);

  const centre = model.box.getCenter(new Vector3());
  const extent = model.box.getSize(new Vector3());
  const reach = Math.max(extent.length(), 1);

  const pose = (): ViewPose => {
    const target = controls.current?.target ?? centre;
    return poseOf(camera.position.clone().sub(target).toArray());
  };
  const place = (to: ViewPose) => {
    const orbit = controls.current;
    if (!orbit) return;
    camera.position.copy(orbit.target).addScaledVector(new Vector3(...towardsEye(to)), reach * 2);
    orbit.update();
    invalidate();
  };
  const zoomTo = (zoom: number) => {
    camera.zoom = Math.min(zoom, 1e5);
    camera.updateProjectionMatrix();
    controls.current?.update();
    invalidate();
  };
  const fitFrom = (from: ViewPose) => {
    controls.current?.target.copy(centre);
    zoomTo(zoomToFit(extent.toArray() as Point, from, size));
    place(from);
  };

  useImperativeHandle(handle, () => ({
    show(view) {
      const to = standardViews[view];
      controls.current?.target.copy(centre);
      zoomTo(zoomToFit(extent.toArray() as Point, to, size));
      if (matchMedia("(prefers-reduced-motion: reduce)").matches) return place(to);
      turning.current = { from: pose(), to, began: performance.now() };
      invalidate();
    },
    fit: () => fitFrom(pose()),
    turn(around, above) {
      const now = pose();
      place({ azimuth_deg: now.azimuth_deg + around, elevation_deg: Math.max(-90, Math.min(90, now.elevation_deg + above)) });
    },
    shift(right, up) {
      const axes = screenAxes(pose());
      const step = new Vector3(...axes.right).multiplyScalar((-right * size.width) / camera.zoom).addScaledVector(new Vector3(...axes.up), (-up * size.height) / camera.zoom);
      controls.current?.target.add(step);
      camera.position.add(step);
      controls.current?.update();
      invalidate();
    },
    zoom: (factor) => zoomTo(camera.zoom * factor),
  }));

  // A new model is shown whole; a new size of the view keeps what is looked at.
  const shown = useRef<ViewModel | null>(null);
  const width = useRef(size.width);
  useEffect(() => {
    camera.up.set(0, 0, 1);
    camera.near = -20 * reach;
    camera.far = 20 * reach;
    if (shown.current !== model) {
      shown.current = model;
      fitFrom(standardViews.isometric);
    } else if (width.current !== size.width) zoomTo((camera.zoom * size.width) / width.current);
    width.current = size.width;
  });

  useFrame(() => {
    const turn = turning.current;
    if (turn) {
      const share = Math.min(1, (performance.now() - turn.began) / TURN_MS);
      place(poseBetween(turn.from, turn.to, share * share * (3 - 2 * share)));
      if (share === 1) turning.current = null;
    }
    const { right, up } = screenAxes(pose());
    light.current?.position
      .set(0, 0, 0)
      .addScaledVector(new Vector3(...right), -0.45)
      .addScaledVector(new Vector3(...up), 0.65)
      .addScaledVector(new Vector3(...towardsEye(pose())), 0.62);
  });

  return (
    <>
      <OrbitControls ref={controls} makeDefault enableDamping={false} zoomToCursor minZoom={1e-3} onStart={() => (turning.current = null)} />
      {/* Its intensity undoes the π of Lambert's law: a face towards the light has exactly the colour `lit`. */}
      <hemisphereLight ref={light} color={colours.lit} groundColor={colours.shaded} intensity={Math.PI} />
    </>
  );
}
