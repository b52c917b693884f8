import { countWord } from "#app/components/gate-words.ts";
import type { PickedFace } from "./drawn-part.tsx";
import type { FaceGroup, ViewModel } from "./load-model.ts";

export interface FaceWordsProps {
  model: ViewModel;
  onPick: (picked: PickedFace) => void;
}

/** The faces of the part in words, for who does not see or can't point at them. */
export function FaceWords({ model, onPick }: FaceWordsProps) {
  // An STL knows no faces: its one group is the whole mesh.
  if (model.groups.length < 2) return null;
  const groups = [...model.groups].sort((a, b) => weight(a) - weight(b) || b.faces.length - a.faces.length || a.label.localeCompare(b.label));
  return (
    <details className="border-t border-hairline">
      <summary className="flex min-h-11 items-center font-label text-label font-semibold text-soft hover:text-blue">Faces in words</summary>
      <ul className="grid max-h-56 gap-x-6 overflow-y-auto pb-2 sm:grid-cols-2 xl:grid-cols-3">
        {groups.map((group) => (
          <li key={`${group.kind}/${group.label}`}>
            <button type="button" onClick={() => onPick({ group, face: null })} className="flex min-h-9 w-full items-center text-left hover:text-blue">
              <span className="first-letter:uppercase">{group.label}</span>
              {group.faces.length > 1 && <span className="text-soft">, {times(group.faces.length)}</span>}
            </button>
          </li>
        ))}
      </ul>
    </details>
  );
}

const times = (count: number) => (count === 2 ? "twice" : `${countWord(count)} times`);

/** What is asked for most comes first. */
function weight({ label }: FaceGroup): number {
  const place = ["bore", "outside Ø", "inside radius", "cone"].findIndex((start) => label.startsWith(start));
  return place === -1 ? 9 : place;
}
