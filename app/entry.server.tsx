import { randomBytes } from "node:crypto";
import { PassThrough } from "node:stream";
import { createReadableStreamFromReadable } from "@react-router/node";
import { isbot } from "isbot";
import { renderToPipeableStream } from "react-dom/server";
import { isRouteErrorResponse, ServerRouter, type EntryContext, type HandleErrorFunction } from "react-router";
import { NonceProvider } from "#app/components/nonce.ts";
import { contentSecurityPolicy } from "#app/http/security.server.ts";

const streamTimeout = 10_000;

export default function handleRequest(request: Request, status: number, headers: Headers, context: EntryContext): Promise<Response> {
  const nonce = randomBytes(16).toString("base64");
  headers.set("Content-Type", "text/html; charset=utf-8");
  headers.set("Content-Security-Policy", contentSecurityPolicy(nonce));
  if (!headers.has("Cache-Control")) headers.set("Cache-Control", "no-store");

  return new Promise((resolve, reject) => {
    let shellSent = false;
    const whole = isbot(request.headers.get("User-Agent") ?? "");
    const { pipe, abort } = renderToPipeableStream(
      <NonceProvider value={nonce}>
        <ServerRouter context={context} url={request.url} nonce={nonce} />
      </NonceProvider>,
      {
        nonce,
        [whole ? "onAllReady" : "onShellReady"]() {
          shellSent = true;
          const body = new PassThrough();
          resolve(new Response(createReadableStreamFromReadable(body), { status, headers }));
          pipe(body);
        },
        onShellError: reject,
        onError(error: unknown) {
          status = 500;
          if (shellSent) console.error(error);
        },
      },
    );
    setTimeout(abort, streamTimeout + 1_000);
  });
}

/** Logs what nobody planned for. Aborted requests and answers that we threw on purpose are not faults. */
export const handleError: HandleErrorFunction = (error, { request }) => {
  if (request.signal.aborted || isRouteErrorResponse(error)) return;
  console.error(`${request.method} ${new URL(request.url).pathname}`, error);
};
