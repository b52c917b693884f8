import type { ReactNode } from "react";
import { Link, type LinkProps } from "react-router";

export type ButtonWeight = "primary" | "secondary" | "quiet";

/** Classes of a button, for the rare place that needs another element than the ones here. */
export function buttonClass(weight: ButtonWeight, bench = false): string {
  return `button button-${weight}${bench ? " button-bench" : ""}`;
}

export interface LinkButtonProps extends Omit<LinkProps, "className" | "style"> {
  weight?: ButtonWeight;
  /** At least 64 px high, for gloves. */
  bench?: boolean;
  /** Leaves the router: downloads and resource routes. */
  download?: boolean;
  wide?: boolean;
  children: ReactNode;
}

/** A link that leads to an action; one primary on a page, the others secondary or quiet. */
export function LinkButton({ weight = "secondary", bench, download, wide, children, ...link }: LinkButtonProps) {
  return (
    <Link {...link} reloadDocument={download || link.reloadDocument} download={download || undefined} className={`${buttonClass(weight, bench)}${wide ? " w-full" : ""}`}>
      {children}
    </Link>
  );
}
