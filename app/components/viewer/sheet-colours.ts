import { useSyncExternalStore } from "react";
import { Color, SRGBColorSpace } from "three";

/** The drawing's own colours as three.js takes them. */
export interface SheetColours {
  sheet: Color;
  ink: Color;
  soft: Color;
  blue: Color;
  /** Faces towards the light and away from it. */
  lit: Color;
  shaded: Color;
}

/** A custom property holds `light-dark(…)` as text; only a used colour is resolved. */
function readColour(probe: HTMLElement, name: string): Color {
  probe.style.color = `var(${name})`;
  return new Color().setStyle(getComputedStyle(probe).color, SRGBColorSpace);
}

function mixed(from: Color, to: Color, share: number): Color {
  // Mixed as the eye sees them, not as light adds up.
  const [a, b] = [from.clone().convertLinearToSRGB(), to.clone().convertLinearToSRGB()];
  return a.lerp(b, share).convertSRGBToLinear();
}

function readColours(): SheetColours {
  const probe = document.createElement("span");
  document.body.append(probe);
  const [sheet, ink, soft, blue] = ["--sheet", "--ink", "--soft", "--blue"].map((name) => readColour(probe, name)) as [Color, Color, Color, Color];
  probe.remove();
  const night = ink.getHSL({ h: 0, s: 0, l: 0 }).l > sheet.getHSL({ h: 0, s: 0, l: 0 }).l;
  // Ink thins out towards the light on paper; on a blueprint the paper itself grows lighter.
  const faces = night ? { lit: mixed(sheet, blue, 0.27), shaded: mixed(sheet, blue, 0.03) } : { lit: mixed(sheet, ink, 0.05), shaded: mixed(sheet, ink, 0.34) };
  return { sheet, ink, soft, blue, ...faces };
}

let current: SheetColours | null = null;

function subscribe(changed: () => void): () => void {
  const again = () => {
    current = null;
    changed();
  };
  const system = matchMedia("(prefers-color-scheme: dark)");
  const observer = new MutationObserver(again);
  observer.observe(document.documentElement, { attributes: true, attributeFilter: ["data-theme"] });
  system.addEventListener("change", again);
  // Changed while nobody listened.
  current = null;
  return () => {
    observer.disconnect();
    system.removeEventListener("change", again);
  };
}

/** The theme's colours now, and again whenever the theme changes. Only in a browser. */
export function useSheetColours(): SheetColours {
  return useSyncExternalStore(subscribe, () => (current ??= readColours()));
}
