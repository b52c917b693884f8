import { InputFault } from "./calculation.ts";
import { materials, type Material } from "./tables/materials.ts";

const plain = (text: string) => text.trim().toLowerCase();

/**
 * The material of this code or name, in small or capital letters.
 *
 * @param key the input that named it, for the fault
 * @throws InputFault when the table has no such material: nothing is guessed from a name that is near
 */
export function materialOf(key: string, text: string): Material {
  const found = materials.find(({ code }) => plain(code) === plain(text)) ?? materials.find(({ name }) => plain(name) === plain(text));
  if (!found) throw new InputFault(key, `${text} is outside the table of materials (${materials.slice(0, 4).map(({ code }) => code).join(", ")} …)`);
  return found;
}
