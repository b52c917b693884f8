import { useCallback, useEffect, useState } from "react";
import { newKey } from "#app/components/bench/draft-store.ts";
import { inspectPhoto } from "#app/components/bench/inspect-photo.ts";
import { forgetPhoto, keepPhoto, listPhotos, type KeptPhoto } from "#app/components/bench/photo-store.ts";
import type { UploadLimits } from "#app/domain/uploads.ts";

export interface BenchPhoto extends KeptPhoto {
  /** Of the picture as it lies on this phone. */
  url: string;
}

/** Photos of a draft: on the phone's disk before they show, so that a reload loses none. */
export function useBenchPhotos(draftKey: string | null, limits: UploadLimits) {
  const [photos, setPhotos] = useState<BenchPhoto[]>([]);
  const [fault, setFault] = useState<string | null>(null);
  const [looking, setLooking] = useState(false);

  useEffect(() => {
    if (draftKey === null) return;
    let gone = false;
    let shown: BenchPhoto[] = [];
    listPhotos(draftKey).then(
      (found) => {
        if (gone) return;
        shown = found.map((photo) => ({ ...photo, url: URL.createObjectURL(photo.blob) }));
        setPhotos(shown);
      },
      () => setFault("This browser keeps no photos. Take them on the fit check's page once it is recorded."),
    );
    return () => {
      gone = true;
      for (const { url } of shown) URL.revokeObjectURL(url);
    };
  }, [draftKey]);

  const add = useCallback(
    async (files: Iterable<File>, characteristicId: string | null) => {
      if (draftKey === null) return;
      setFault(null);
      setLooking(true);
      for (const file of files) {
        const seen = await inspectPhoto(file, limits);
        if (!seen.ok) {
          setFault(seen.reason);
          continue;
        }
        const photo: KeptPhoto = { id: newKey(), draftKey, characteristicId, name: file.name || "photo.jpg", mediaType: seen.mediaType, sha256: seen.sha256, blob: file };
        try {
          await keepPhoto(photo);
          setPhotos((before) => [...before, { ...photo, url: URL.createObjectURL(file) }]);
        } catch {
          // Private windows and full disks: each browser has its own fault for it, all mean the same.
          setFault("This phone could not keep the photo. Take it on the fit check's page once it is recorded.");
        }
      }
      setLooking(false);
    },
    [draftKey, limits],
  );

  const remove = useCallback(async (photo: BenchPhoto) => {
    await forgetPhoto(photo.id);
    URL.revokeObjectURL(photo.url);
    setPhotos((before) => before.filter(({ id }) => id !== photo.id));
  }, []);

  return { photos, fault, looking, add, remove };
}

export type BenchPhotos = ReturnType<typeof useBenchPhotos>;
