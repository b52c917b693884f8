/** The four roles of a shop's people; one person can hold several. */
export const roles = ["owner", "designer", "machinist", "customer"] as const;
export type Role = (typeof roles)[number];

const everybody: readonly Role[] = roles;
const designing: readonly Role[] = ["owner", "designer"];
const making: readonly Role[] = ["owner", "designer", "machinist"];
const owning: readonly Role[] = ["owner"];

/**
 * Who may do what: the one table that every loader, action and API route asks.
 * Which rows a person reaches is a second question, answered by the scope (`inShop`):
 * customers and machinists are kept to their own jobs there.
 */
export const permissions = {
  "account:manage": everybody,
  "today:read": everybody,
  "shop:manage": owning,
  "people:manage": owning,
  "guest-link:manage": designing,
  "logbook:read": designing,

  "customer:read": designing,
  "customer:write": designing,
  "job:read": everybody,
  "job:write": designing,
  "job:share": designing,
  "deposit:read": ["owner", "customer"],
  "deposit:record": owning,

  "mating-part:read": making,
  "mating-part:write": designing,
  "part:read": everybody,
  "part:write": designing,
  "equipment:read": making,
  "equipment:write": designing,

  "revision:read": everybody,
  "revision:write": designing,
  "model:view": everybody,
  "model:download": making,
  "photo:view": everybody,
  "file:upload": designing,

  "print:read": making,
  "print:record": designing,
  "fit-check:read": making,
  "fit-check:record": designing,
  "callout:read": everybody,
  "callout:write": everybody,
  "callout:internal": making,
  "calculation:read": making,
  "calculation:write": designing,
  "instructions:read": making,
  "instructions:write": designing,

  "makeability:read": making,
  "makeability:answer": ["machinist"],
  "makeability:record": designing,
  "makeability:price": ["owner", "machinist"],
  "approval:read": ["owner", "designer", "customer"],
  "approval:give": ["customer"],
  "approval:record": designing,

  "gate:read": designing,
  "gate:propose": designing,
  "gate:decide": owning,
  "packet:read": making,
  "packet:acknowledge": ["machinist"],
  "packet:correct": owning,
  "packet:recall": owning,
} as const satisfies Record<string, readonly Role[]>;

export type Action = keyof typeof permissions;

/** May somebody with these roles do this? No role, no permission. */
export function can(held: readonly Role[], action: Action): boolean {
  const allowed: readonly Role[] = permissions[action];
  return held.some((role) => allowed.includes(role));
}

/** Are these roles limited to the jobs that are theirs or were shared with them? */
export function isKeptToJobs(held: readonly Role[]): boolean {
  return !held.includes("owner") && !held.includes("designer");
}
