import { useId, useState, type DragEvent } from "react";
import { buttonClass } from "#app/components/link-button.tsx";
import { Length, Volume } from "#app/components/measure.tsx";
import { Notice } from "#app/components/notice.tsx";
import { ProgressLine } from "#app/components/progress-line.tsx";
import type { UploadKind, UploadLimits } from "#app/domain/uploads.ts";
import type { Announcement } from "./transfer.ts";
import { useUploads, type UploadItem } from "./use-uploads.ts";

export interface UploadPanelProps {
  target: Announcement["target"];
  limits: UploadLimits;
  accepts: readonly UploadKind[];
  /** "STEP, STL, photos, PDF drawings" */
  what: string;
  /** Opens the camera on a phone, and sends at once. */
  camera?: boolean;
}

const acceptOf: Record<UploadKind, string> = { step: ".step,.stp", stl: ".stl", photo: "image/jpeg,image/png,image/webp", pdf: "application/pdf" };
const mb = (bytes: number) => (bytes / 1024 / 1024).toLocaleString("en", { maximumFractionDigits: bytes < 10 * 1024 * 1024 ? 1 : 0 });

/** Files dropped or picked, looked at before anything is sent, then sent straight to the store. */
export function UploadPanel({ target, limits, accepts, what, camera = false }: UploadPanelProps) {
  const uploads = useUploads({ target, limits, accepts, atOnce: camera });
  const [over, setOver] = useState(false);
  const id = useId();
  const ready = uploads.items.filter(({ state }) => state === "ready");
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    uploads.add(event.dataTransfer.files);
  };
  return (
    <div>
      <div
        onDragOver={(event) => {
          event.preventDefault();
          setOver(true);
        }}
        onDragLeave={() => setOver(false)}
        onDrop={drop}
        className={`flex flex-wrap items-center justify-between gap-x-6 gap-y-3 border-[1.5px] border-dashed px-4 py-4 ${over ? "border-blue bg-wash" : "border-rule"}`}
      >
        <p className="text-soft">
          Drop {what} here. {accepts.every((kind) => kind === "photo") ? `A photo may have ${limits.photoMb} MB.` : `A model may have ${limits.modelMb} MB, a photo ${limits.photoMb} MB.`}
        </p>
        <label htmlFor={id} className={`${buttonClass("secondary")} cursor-pointer focus-within:outline-2`}>
          {camera ? "Take or choose a photo" : "Choose files"}
          <input
            id={id}
            type="file"
            multiple
            accept={accepts.map((kind) => acceptOf[kind]).join(",")}
            capture={camera ? "environment" : undefined}
            className="sr-only"
            onChange={(event) => {
              uploads.add(event.currentTarget.files ?? []);
              event.currentTarget.value = "";
            }}
          />
        </label>
      </div>
      <ul aria-label="Files to send" className="divide-y divide-hairline">
        {uploads.items.map((item) => (
          <li key={item.id} className="py-3">
            <Item item={item} uploads={uploads} />
          </li>
        ))}
      </ul>
      {ready.length > 0 && !camera && (
        <button type="button" className={`${buttonClass("primary")} mt-2`} onClick={() => void uploads.sendAll()}>
          {ready.length === 1 ? `Upload ${ready[0]!.file.name}` : `Upload ${ready.length} files`}
        </button>
      )}
    </div>
  );
}

function Item({ item, uploads }: { item: UploadItem; uploads: ReturnType<typeof useUploads> }) {
  const { name, size } = item.file;
  const remove = (word: string) => (
    <button type="button" className={buttonClass("quiet")} onClick={() => uploads.remove(item)}>
      {word}
    </button>
  );
  switch (item.state) {
    case "inspecting":
      return <ProgressLine label={`Looking at ${name}`} share={item.share} />;
    case "refused":
      return (
        <Notice kind="error" action={remove("Take off the list")}>
          <b>{name}</b> is not sent. {item.reason}
        </Notice>
      );
    case "ready":
      return (
        <div className="flex flex-wrap items-start justify-between gap-x-6 gap-y-2">
          <div>
            <p className="font-semibold">{name}</p>
            <Preview item={item} onUnit={(unit) => uploads.setUnit(item, unit)} />
          </div>
          {remove("Leave out")}
        </div>
      );
    case "paused":
      return (
        <div>
          <ProgressLine label={name} share={item.share} text={`paused at ${mb(item.share * size)} of ${mb(size)} MB`} />
          <button type="button" className={buttonClass("secondary")} onClick={() => void uploads.send(item)}>
            Go on
          </button>
          {remove("Cancel")}
        </div>
      );
    case "sending":
    case "sent":
      return (
        <div>
          <ProgressLine label={name} share={item.share} text={sendingText(item)} />
          {item.state === "sending" && (
            <div className="flex gap-3">
              <button type="button" className={buttonClass("quiet")} onClick={() => uploads.pause(item)}>
                Pause
              </button>
              {remove("Cancel")}
            </div>
          )}
        </div>
      );
  }
}

function sendingText({ file, share, rate, state }: UploadItem): string {
  if (state === "sent") return "sent, being checked";
  const sent = `${mb(share * file.size)} of ${mb(file.size)} MB`;
  if (!rate || rate <= 0) return sent;
  const left = ((1 - share) * file.size) / rate;
  return `${sent}, ${mb(rate)} MB a second, about ${left < 90 ? `${Math.max(1, Math.round(left))} s` : `${Math.round(left / 60)} min`} left`;
}

/** What an STL measures, before it is sent: a wrong unit shows here, not on the printer. */
function Preview({ item, onUnit }: { item: UploadItem; onUnit: (unit: "mm" | "in") => void }) {
  const { measure } = item;
  if (!measure?.bounds_mm) return <p className="text-soft">{mb(item.file.size)} MB</p>;
  const [x, y, z] = measure.bounds_mm.size;
  return (
    <div className="text-soft">
      <p>
        <Length mm={x} bare digits={2} /> × <Length mm={y} bare digits={2} /> × <Length mm={z} digits={2} />
        {measure.volume_mm3 !== null && (
          <>
            , <Volume mm3={measure.volume_mm3} digits={4} />
          </>
        )}
        , {measure.mesh?.triangles.toLocaleString("en")} triangles, {measure.mesh?.closed ? "closed" : "not closed"}
      </p>
      {item.warning && <p className="text-attention">{item.warning}</p>}
      <fieldset className="flex items-center gap-x-5">
        <legend className="sr-only">Unit of the numbers in {item.file.name}</legend>
        <span aria-hidden="true">Its numbers are</span>
        {(["mm", "in"] as const).map((unit) => (
          <label key={unit} className="flex min-h-11 items-center gap-2 text-ink">
            <input type="radio" className="tick" name={`unit-${item.id}`} checked={item.unit === unit} onChange={() => onUnit(unit)} />
            {unit === "mm" ? "millimetres" : "inches"}
          </label>
        ))}
      </fieldset>
    </div>
  );
}
