/** Our mark: two parts laid over each other, blue where they touch. */
export function Mark({ className = "h-7 w-auto" }: { className?: string }) {
  return (
    <svg viewBox="0 0 34 24" className={className} aria-hidden="true" focusable="false">
      <path d="M17 3.2a10.5 10.5 0 0 1 0 17.6 10.5 10.5 0 0 1 0-17.6Z" className="fill-blue" />
      <circle cx="11.25" cy="12" r="10.4" className="fill-none stroke-ink" strokeWidth="1.7" />
      <circle cx="22.75" cy="12" r="10.4" className="fill-none stroke-ink" strokeWidth="1.7" />
    </svg>
  );
}
