export interface ProgressLineProps {
  /** What is under way: "Uploading flange-4.step". */
  label: string;
  /** 0 to 1; null while nobody can know. */
  share: number | null;
  /** In words: "12 of 50 MB, about 20 s left". */
  text?: string;
}

/** Work under way, as a filling line and in words. */
export function ProgressLine({ label, share, text }: ProgressLineProps) {
  const percent = share === null ? null : Math.round(Math.min(1, Math.max(0, share)) * 100);
  return (
    <div className="py-2">
      <div className="flex flex-wrap justify-between gap-x-6">
        <span className="min-w-0 font-medium [overflow-wrap:anywhere]">{label}</span>
        <span className="text-soft">{text ?? (percent === null ? "under way" : `${percent} %`)}</span>
      </div>
      <svg
        role="progressbar"
        aria-label={label}
        aria-valuenow={percent ?? undefined}
        aria-valuemin={0}
        aria-valuemax={100}
        aria-valuetext={text}
        className="mt-1.5 block h-2 w-full border border-ink"
      >
        {percent === null ? <rect className="progress-unknown fill-blue" width="25%" height="100%" /> : <rect className="fill-blue" width={`${percent}%`} height="100%" />}
      </svg>
    </div>
  );
}
