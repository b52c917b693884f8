/** A number with a fixed count of decimals, "-0.00" written as "0.00". */
export function decimals(value: number, count: number): string {
  const text = value.toFixed(count);
  return Number(text) === 0 ? text.replace("-", "") : text;
}

/**
 * Values that are read together, written with the decimals of the finest of them: 62.09, 62.15, 62.20.
 * Binary dust beyond a millionth is not shown.
 */
export function alignedDecimals(values: readonly number[]): string[] {
  const count = Math.max(0, ...values.map((value) => fraction(value).length));
  return values.map((value) => decimals(value, count));
}

function fraction(value: number): string {
  return value.toFixed(6).replace(/0+$/, "").split(".")[1] ?? "";
}

/** "1 place", "3 places". */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}

/** "a", "a and b", "a, b and c". */
export function inWords(items: readonly string[]): string {
  if (items.length < 2) return items.join("");
  return `${items.slice(0, -1).join(", ")} and ${items.at(-1)!}`;
}
