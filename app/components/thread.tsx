import type { ReactNode } from "react";
import { Day } from "#app/components/day.tsx";

export interface ThreadMessage {
  id: string;
  who: string;
  at: string;
  text: string;
  /** Who may be meant by it, or how it came: "by text message, recorded by Ines Barrow". */
  origin?: string;
  /** Not seen by customers and guests. */
  internal?: boolean;
  pictures?: { href: string; src: string; alt: string }[];
}

export interface ThreadProps {
  messages: ThreadMessage[];
  label: string;
  /** The form that answers, or the sentence that says why it is closed. */
  children?: ReactNode;
}

/** A callout's conversation, set like notes: who, when, words. */
export function Thread({ messages, label, children }: ThreadProps) {
  return (
    <section aria-label={label}>
      <ol className="divide-y divide-hairline border-t border-hairline">
        {messages.map(({ id, who, at, text, origin, internal, pictures = [] }) => (
          <li key={id} id={`message-${id}`} className={`py-3 ${internal ? "inside-rule pl-4" : ""}`}>
            <p className="flex flex-wrap items-baseline gap-x-3">
              <b>{who}</b>
              <span className="text-sm text-soft">
                <Day at={at} time />
                {origin && `, ${origin}`}
              </span>
              {internal && <span className="text-sm font-medium text-attention">inside the shop only</span>}
            </p>
            <p className="max-w-prose whitespace-pre-line [overflow-wrap:anywhere]">{text}</p>
            {pictures.length > 0 && (
              <ul className="mt-2 flex flex-wrap gap-2">
                {pictures.map(({ href, src, alt }) => (
                  <li key={href}>
                    <a href={href}>
                      <img src={src} alt={alt} loading="lazy" className="h-24 w-auto border border-rule" />
                    </a>
                  </li>
                ))}
              </ul>
            )}
          </li>
        ))}
      </ol>
      {children && <div className="mt-4">{children}</div>}
    </section>
  );
}
