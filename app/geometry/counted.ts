/** A number with its noun, as a sentence wants it: "1 triangle", "1,252 triangles". */
export function counted(n: number, one: string, many = `${one}s`): string {
  return `${n.toLocaleString("en-US")} ${n === 1 ? one : many}`;
}
