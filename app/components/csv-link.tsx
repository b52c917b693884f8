/** A short table as a file, beside its heading; longer ones carry it in their own tools. */
export function CsvLink({ href, what }: { href: string; what: string }) {
  return (
    <a href={href} download className="word no-print inline-flex min-h-11 items-center">
      CSV<span className="sr-only"> of {what}</span>
    </a>
  );
}
