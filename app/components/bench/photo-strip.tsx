import { useId } from "react";
import type { BenchPhotos } from "#app/components/bench/use-bench-photos.ts";

export interface PhotoStripProps {
  bench: BenchPhotos;
  characteristicId: string | null;
  /** The camera's own input; the key that opens it may lie elsewhere. */
  inputId: string;
}

/** The photos taken for one thing, small, and the camera behind them. */
export function PhotoStrip({ bench, characteristicId, inputId }: PhotoStripProps) {
  const mine = bench.photos.filter((photo) => photo.characteristicId === characteristicId);
  const id = useId();
  return (
    <div>
      <input
        id={inputId}
        type="file"
        accept="image/jpeg,image/png,image/webp"
        capture="environment"
        multiple
        hidden
        onChange={(event) => {
          void bench.add([...(event.currentTarget.files ?? [])], characteristicId);
          event.currentTarget.value = "";
        }}
      />
      {mine.length > 0 && (
        <ul aria-label="Photos kept" className="flex flex-wrap gap-2 py-1">
          {mine.map((photo, index) => (
            <li key={photo.id} className="flex items-center border border-rule">
              <img src={photo.url} alt={`Photo ${index + 1}`} className="size-11 object-cover" />
              <button type="button" className="min-h-11 scroll-mb-96 px-3 font-medium text-blue" aria-label={`Take photo ${index + 1} out`} onClick={() => void bench.remove(photo)}>
                Out
              </button>
            </li>
          ))}
        </ul>
      )}
      {bench.looking && <p role="status" className="text-soft">Keeping the photo …</p>}
      {bench.fault && <p id={id} role="alert" className="font-medium text-failed">{bench.fault}</p>}
    </div>
  );
}

export const openCamera = (inputId: string) => document.getElementById(inputId)?.click();
