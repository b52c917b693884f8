import type { IncomingMessage, ServerResponse } from "node:http";

export const escapeHtml = (text: string) => text.replace(/[&<>"']/g, (c) => `&#${c.charCodeAt(0)};`);

const STYLE = `
:root { color-scheme: light dark; --ground: light-dark(#ece9e1, #06243d); --sheet: light-dark(#fbf9f4, #0a3152); --ink: light-dark(#0d2b45, #eaf3fa); --soft: light-dark(#52657a, #a9c4d9); --rule: light-dark(#74838f, #7ba3c2); --blue: light-dark(#1a68ab, #8cc7f5); }
* { box-sizing: border-box; }
body { margin: 0; background: var(--ground); color: var(--ink); font: 1rem/1.45 "Barlow", "Helvetica Neue", Arial, sans-serif; }
main { max-width: 52rem; margin: 2rem auto; padding: 1.5rem 2rem; background: var(--sheet); border: 1px solid var(--rule); }
h1 { font-size: 1.625rem; line-height: 1.2; font-weight: 500; margin: 0 0 .5rem; }
h2 { font-size: 1.1rem; font-weight: 600; margin: 2rem 0 .5rem; }
p { margin: .5rem 0; } .soft { color: var(--soft); }
a { color: var(--blue); } a:focus-visible, button:focus-visible, input:focus-visible { outline: 2px solid var(--blue); outline-offset: 2px; }
table { border-collapse: collapse; width: 100%; } th { text-align: left; font-weight: 500; color: var(--soft); } th, td { padding: .6rem .8rem .6rem 0; border-bottom: 1px solid var(--rule); vertical-align: top; }
dl { display: grid; grid-template-columns: max-content 1fr; gap: .25rem 1rem; margin: 1rem 0; } dt { color: var(--soft); } dd { margin: 0; overflow-wrap: anywhere; }
pre { white-space: pre-wrap; overflow-wrap: anywhere; font: inherit; border-top: 1px solid var(--rule); padding-top: 1rem; }
iframe { width: 100%; height: 32rem; border: 1px solid var(--rule); background: #fff; }
button, input { font: inherit; min-height: 44px; padding: .5rem .9rem; border: 1px solid var(--rule); background: var(--ground); color: var(--ink); }
button { cursor: pointer; text-align: left; } label { display: block; margin: .75rem 0; } label input:not([type=checkbox]) { display: block; width: 100%; } input[type=checkbox] { min-height: auto; }
ul { list-style: none; padding: 0; } li { margin: .5rem 0; } li button { width: 100%; }
@media (max-width: 40rem) { main { margin: 0; padding: 1rem; border: 0; } }`;

/** A plain page of a stand-in; `body` is HTML already. */
export function page(title: string, body: string): string {
  return `<!doctype html><html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1"><title>${escapeHtml(title)}</title><style>${STYLE}</style></head><body><main>${body}</main></body></html>`;
}

export const PAGE_POLICY = "default-src 'none'; style-src 'unsafe-inline'; frame-src 'self'; base-uri 'none'; frame-ancestors 'self'";

export function sendPage(response: ServerResponse, status: number, html: string, policy = PAGE_POLICY): void {
  response.writeHead(status, { "Content-Type": "text/html; charset=utf-8", "Content-Security-Policy": policy, "X-Content-Type-Options": "nosniff", "Referrer-Policy": "no-referrer", "Cache-Control": "no-store" }).end(html);
}

export function sendJson(response: ServerResponse, status: number, value: unknown): void {
  response.writeHead(status, { "Content-Type": "application/json; charset=utf-8", "X-Content-Type-Options": "nosniff", "Cache-Control": "no-store" }).end(JSON.stringify(value));
}

/** Whether it was asked for by an address of this machine; a foreign page can give its own name this machine's address. */
export function isForLoopback(request: IncomingMessage): boolean {
  return /^(127\.0\.0\.1|localhost|\[::1\])(:\d+)?$/.test(request.headers.host ?? "");
}

const LARGEST_FORM = 64 * 1024;

/** The fields of a posted form; undefined when it is too long to be one. */
export async function readFields(request: IncomingMessage): Promise<URLSearchParams | undefined> {
  let text = "";
  for await (const chunk of request.setEncoding("utf8") as AsyncIterable<string>) {
    text += chunk;
    if (text.length > LARGEST_FORM) return undefined;
  }
  return new URLSearchParams(text);
}
