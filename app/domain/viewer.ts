import type { Action, Role } from "./permissions.ts";
import { can } from "./permissions.ts";

/** Who is looking: a person with an account, or a guest whose link opened one job. */
export interface Viewer {
  personId: string | null;
  guestLinkId: string | null;
  name: string;
  email: string | null;
  shopId: string;
  shopName: string;
  roles: Role[];
  /** Jobs this viewer is kept to, or "*" for every job of the shop. */
  jobs: "*" | string[];
  sessionId: string | null;
  /** When this session last proved who it is; signatures ask for less than five minutes. */
  provedAt: string | null;
  provedBy: "password" | "e-mailed code" | "GitHub" | "guest link" | null;
}

export function viewerCan(viewer: Viewer, action: Action): boolean {
  return can(viewer.roles, action);
}

/** The product itself at work for one shop: the worker, the exchange of a guest link. */
export function housekeeper(shopId: string): Viewer {
  return {
    personId: null,
    guestLinkId: null,
    name: "Spotblue",
    email: null,
    shopId,
    shopName: "",
    roles: [],
    jobs: "*",
    sessionId: null,
    provedAt: null,
    provedBy: null,
  };
}
