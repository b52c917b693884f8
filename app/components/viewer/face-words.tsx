import { countWord } from "#app/components/gate-words.ts";
import type { PickedFace } from "./drawn-part.tsx";
import type { FaceGroup, ViewModel } from "./load-model.ts";

export interface FaceWordsProps {
  model: ViewModel;
  picked: PickedFace | null;
  onPick: (picked: PickedFace) => void;
}

/** The faces of the part in words, for who does not see or can't point at them. */
export function FaceWords({ model, picked, onPick }: FaceWordsProps) {
  const groups = [...model.groups].sort((a, b) => weight(a) - weight(b) || b.faces.length - a.faces.length || a.label.localeCompare(b.label));
  return (
    <ul aria-label="Faces" className="flex max-h-40 flex-wrap gap-x-6 overflow-y-auto">
      {groups.map((group) => (
        <li key={`${group.kind}/${group.label}`}>
          <button
            type="button"
            aria-pressed={picked?.group === group}
            onClick={() => onPick({ group, face: null })}
            className={`inline-flex min-h-11 items-center text-left hover:text-blue lg:min-h-9 ${picked?.group === group ? "font-semibold text-blue" : ""}`}
          >
            {group.label}
            {group.faces.length > 1 && <span className="font-normal text-soft">, {times(group.faces.length)}</span>}
          </button>
        </li>
      ))}
    </ul>
  );
}

const times = (count: number) => (count === 2 ? "twice" : `${countWord(count)} times`);

/** What is asked for most comes first. */
function weight({ label }: FaceGroup): number {
  const place = ["bore", "outside Ø", "inside radius", "cone"].findIndex((start) => label.startsWith(start));
  return place === -1 ? 9 : place;
}
