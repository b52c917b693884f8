import { readFileSync } from "node:fs";
import { expect, test } from "vitest";

const css = readFileSync(new URL("../../../app/app.css", import.meta.url), "utf8");
const tokens = new Map([...css.matchAll(/--([a-z-]+): light-dark\((#[0-9a-f]{6}), (#[0-9a-f]{6})\);/g)].map(([, name, paper, blueprint]) => [name!, { paper: paper!, blueprint: blueprint! }]));
type Theme = "paper" | "blueprint";

/** Relative luminance and contrast ratio as WCAG 2.2 defines them (definitions "relative luminance", "contrast ratio"). */
function contrast(a: string, b: string): number {
  const luminance = (hex: string) => {
    const [r, g, b] = [1, 3, 5].map((at) => parseInt(hex.slice(at, at + 2), 16) / 255).map((c) => (c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4));
    return 0.2126 * r! + 0.7152 * g! + 0.0722 * b!;
  };
  const [light, dark] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (light! + 0.05) / (dark! + 0.05);
}

test("black on white has the contrast that WCAG names as the largest", () => {
  expect(contrast("#000000", "#ffffff")).toBeCloseTo(21, 10);
});

const themes: Theme[] = ["paper", "blueprint"];
const pairs = (names: string[], grounds: string[]) => themes.flatMap((theme) => names.flatMap((name) => grounds.map((ground) => ({ theme, name, ground }))));
const ratio = ({ theme, name, ground }: { theme: Theme; name: string; ground: string }) => contrast(tokens.get(name)![theme], tokens.get(ground)![theme]);

test.each(pairs(["ink", "soft", "blue", "met", "attention", "failed"], ["sheet", "ground", "wash"]))("$name on $ground of $theme can be read (WCAG 2.2, 1.4.3: 4.5)", (pair) => {
  expect(ratio(pair)).toBeGreaterThanOrEqual(4.5);
});

test.each(pairs(["ink", "failed", "soft"], ["failed-wash"]))("$name on $ground of $theme can be read (WCAG 2.2, 1.4.3: 4.5)", (pair) => {
  expect(ratio(pair)).toBeGreaterThanOrEqual(4.5);
});

test.each(pairs(["ink", "met", "failed"], ["sheet"]))("go and no-go in $name on $ground of $theme (WCAG 2.2, 1.4.6: 7)", (pair) => {
  expect(ratio(pair)).toBeGreaterThanOrEqual(7);
});

test.each(pairs(["rule"], ["sheet", "ground"]))("a field's $name on $ground of $theme can be seen (WCAG 2.2, 1.4.11: 3)", (pair) => {
  expect(ratio(pair)).toBeGreaterThanOrEqual(3);
});
