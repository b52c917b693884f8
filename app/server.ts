import { createServer } from "node:http";
import { fileURLToPath, pathToFileURL } from "node:url";
import { createRequestHandler } from "@react-router/express";
import compression from "compression";
import express from "express";
import type { ServerBuild } from "react-router";
import { env } from "./env.server.ts";

const root = new URL("../", import.meta.url);
const buildFile = fileURLToPath(new URL("build/server/index.js", root));
const clientFolder = fileURLToPath(new URL("build/client/", root));
const build = (await import(pathToFileURL(buildFile).href)) as ServerBuild;
const origin = new URL(env.APP_ORIGIN);

const app = express();
app.disable("x-powered-by");
app.set("trust proxy", env.TRUSTED_PROXIES);
app.use(compression({ filter: (request, response) => !String(response.getHeader("Content-Type")).startsWith("text/event-stream") && compression.filter(request, response) }));
app.use((request, response, next) => {
  response.set({
    "X-Content-Type-Options": "nosniff",
    "Referrer-Policy": "same-origin",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Cross-Origin-Resource-Policy": "same-origin",
    "Permissions-Policy": "camera=(self), microphone=(), geolocation=()",
  });
  if (origin.protocol === "https:") response.set("Strict-Transport-Security", "max-age=31536000; includeSubDomains");
  // The configured public origin is the only truth about where we are: whatever a proxy or a
  // caller says in Host and X-Forwarded-Host is not asked.
  request.headers.host = origin.host;
  delete request.headers["x-forwarded-host"];
  Object.defineProperty(request, "protocol", { value: origin.protocol.slice(0, -1) });
  request.headers["x-spotblue-address"] = request.ip ?? "unknown";
  next();
});
app.use("/assets", express.static(`${clientFolder}assets`, { immutable: true, maxAge: "1y", fallthrough: false }));
app.use(express.static(clientFolder, { maxAge: "1h", redirect: false }));
app.all("/{*path}", createRequestHandler({ build }));

const server = createServer(app);
server.listen(env.PORT, env.HOST, () => console.log(JSON.stringify({ ready: true, port: env.PORT })));

let stopping = false;
for (const signal of ["SIGTERM", "SIGINT"] as const) {
  process.on(signal, () => {
    if (stopping) return;
    stopping = true;
    // Requests under way are finished; event streams end themselves on the same signal.
    server.close(() => process.exit(0));
    server.closeIdleConnections();
    setTimeout(() => process.exit(0), 5_000).unref();
  });
}
