const months = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
const weekdays = ["Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"];

export interface DayProps {
  /** ISO 8601, or milliseconds; a bare date is that day in UTC. */
  at: string | number | Date;
  /** The minute too, with its zone. */
  time?: boolean;
  weekday?: boolean;
  /** Left out where the year goes without saying. */
  year?: boolean;
}

/**
 * A day in UTC, the same on server and in every browser: month names are our own, because
 * Intl spells September differently from one release of its data to the next.
 *
 * @throws RangeError when the date can't be read
 */
export function dayText({ at, time, weekday, year = true }: DayProps): string {
  const date = new Date(at);
  if (Number.isNaN(date.getTime())) throw new RangeError(`not a date: ${String(at)}`);
  const words = [
    weekday ? weekdays[date.getUTCDay()] : "",
    String(date.getUTCDate()),
    months[date.getUTCMonth()],
    year ? String(date.getUTCFullYear()) : "",
  ].filter(Boolean);
  return time ? `${words.join(" ")}, ${date.toISOString().slice(11, 16)} UTC` : words.join(" ");
}

export function Day(props: DayProps) {
  const iso = new Date(props.at).toISOString();
  return (
    <time dateTime={props.time ? iso : iso.slice(0, 10)} className="whitespace-nowrap">
      {dayText(props)}
    </time>
  );
}
