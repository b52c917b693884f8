import { href, Link } from "react-router";
import { PhotoWithSpots, type PhotoSpot } from "#app/components/photo-with-spots.tsx";

export interface PhotoView {
  fileId: string;
  name: string;
  /** What it shows: the characteristic, or the fit check as a whole. */
  shows: string;
  ready: boolean;
  width: number | null;
  height: number | null;
  spots: PhotoSpot[];
}

/** Photos at full width, each with its numbered callouts and the way to put one. */
export function PhotoList({ photos }: { photos: PhotoView[] }) {
  return (
    <ul className="grid gap-6 xl:grid-cols-2">
      {photos.map((photo) => (
        <li key={photo.fileId}>
          {photo.ready && photo.width !== null && photo.height !== null ? (
            <PhotoWithSpots src={href("/files/:fileId/:kind", { fileId: photo.fileId, kind: "screen" })} alt={`Photo: ${photo.shows}`} width={photo.width} height={photo.height} spots={photo.spots} />
          ) : (
            <p className="border border-dashed border-rule px-4 py-10 text-soft">{photo.name} is being prepared. It appears here by itself.</p>
          )}
          <p className="flex flex-wrap items-center justify-between gap-x-6">
            <span className="text-soft">{photo.shows}</span>
            <Link to={href("/photos/:fileId", { fileId: photo.fileId })} className="word flex min-h-11 items-center">
              {photo.spots.length > 0 ? (photo.spots.length === 1 ? "One callout" : `${photo.spots.length} callouts`) : "Put a callout"}
            </Link>
          </p>
        </li>
      ))}
    </ul>
  );
}
