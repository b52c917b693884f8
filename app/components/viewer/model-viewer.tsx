import { Component, lazy, Suspense, useState, useSyncExternalStore, type ReactNode } from "react";
import { buttonClass } from "#app/components/link-button.tsx";
import type { Marker } from "./marker-layer.tsx";

export type { Marker };

/** three.js is fetched only where a model is looked at. */
const ModelStage = lazy(() => import("./model-stage.tsx"));

export interface ModelViewerProps {
  /** Address of the view mesh: binary glTF in mm. */
  meshUrl: string;
  /** What is shown, for who does not see it: "Filler flange, revision 4". */
  name: string;
  /** A drawn picture in its place, where nothing can be drawn. */
  pictureUrl?: string | null;
  /** Only the cut of a closed part is lined. */
  closed: boolean;
  markers?: readonly Marker[];
  /** Offers to place a callout; told the point on the part and what it lies on. */
  onPickPoint?: (point_mm: [number, number, number], label: string) => void;
  /** Further words beside the tools, such as links. */
  more?: ReactNode;
  /** A few words in the upper right of the view. */
  note?: ReactNode;
}

const noMarkers: readonly Marker[] = [];
const never = () => () => {};

let drawable: boolean | null = null;

function canDraw(): boolean {
  if (drawable === null) {
    const context = document.createElement("canvas").getContext("webgl2");
    drawable = context !== null;
    // Browsers allow few contexts at a time; this one was only a question.
    context?.getExtension("WEBGL_lose_context")?.loseContext();
  }
  return drawable;
}

/**
 * A model to turn, cut and measure. Nothing of it is drawn on the server; where a browser can't
 * draw, it says so and shows the picture. Its measures stand beside it on the page.
 */
export function ModelViewer({ markers = noMarkers, pictureUrl, ...props }: ModelViewerProps) {
  const able = useSyncExternalStore(never, canDraw, () => null);
  const [fault, setFault] = useState<string | null>(null);
  const [attempt, setAttempt] = useState(0);
  const again = () => {
    setFault(null);
    setAttempt(attempt + 1);
  };
  if (able === null) return <Instead pictureUrl={null} name={props.name}>Loading the view</Instead>;
  if (!able) {
    return (
      <Instead pictureUrl={pictureUrl} name={props.name}>
        This browser can't draw in three dimensions: WebGL is missing or switched off. The measures on this page are complete without it.
      </Instead>
    );
  }
  if (fault) {
    return (
      <Instead
        pictureUrl={pictureUrl}
        name={props.name}
        action={
          <button type="button" className={buttonClass("secondary")} onClick={again}>
            Draw again
          </button>
        }
      >
        {fault}
      </Instead>
    );
  }
  return (
    <FaultCatcher key={`${props.meshUrl} ${attempt}`} onFault={() => setFault("The drawing of this view failed. The measures on this page are complete without it.")}>
      <Suspense fallback={<Instead pictureUrl={null} name={props.name}>Loading the view</Instead>}>
        <ModelStage key={`${props.meshUrl} ${attempt}`} {...props} markers={markers} onFault={setFault} />
      </Suspense>
    </FaultCatcher>
  );
}

function Instead({ pictureUrl, name, action, children }: { pictureUrl?: string | null; name: string; action?: ReactNode; children: ReactNode }) {
  return (
    <div className="flex h-full min-h-[20rem] flex-1 flex-col items-center justify-center gap-4 p-6 text-center">
      {pictureUrl && <img src={pictureUrl} alt={name} width={480} height={360} className="h-auto max-w-full" />}
      <p role="status" className="max-w-md text-soft">
        {children}
      </p>
      {action}
    </div>
  );
}

/** What goes wrong while drawing stays in the view; the page goes on. */
class FaultCatcher extends Component<{ onFault: () => void; children: ReactNode }> {
  override componentDidCatch(): void {
    this.props.onFault();
  }

  static getDerivedStateFromError() {
    return { failed: true };
  }

  override state = { failed: false };

  override render(): ReactNode {
    return this.state.failed ? null : this.props.children;
  }
}
