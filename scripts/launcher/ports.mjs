import net from "node:net";

const LOOPBACK = "127.0.0.1";

/** The port if nobody listens on it, undefined if it is taken or not ours to use. 0 takes any. */
function tryPort(port) {
  return new Promise((resolve) => {
    const server = net.createServer();
    server.once("error", () => resolve(undefined));
    server.listen({ port, host: LOOPBACK, exclusive: true }, () => {
      const taken = server.address().port;
      server.close(() => resolve(taken));
    });
  });
}

/**
 * A free port on loopback: the wanted one, else the next free one after it; without a wish any.
 *
 * Somebody else may take it before it is used; who listens on it must be ready to ask again.
 */
export async function freePort(wanted = 0, avoid = new Set()) {
  if (wanted === 0) return tryPort(0);
  for (let port = wanted; port < Math.min(wanted + 200, 65_536); port++) {
    if (!avoid.has(port) && (await tryPort(port)) !== undefined) return port;
  }
  return tryPort(0);
}

/** Several free ports that differ, none of them wished for. */
export async function freePorts(count) {
  const servers = await Promise.all(
    Array.from({ length: count }, () =>
      new Promise((resolve, reject) => {
        const server = net.createServer();
        server.once("error", reject);
        server.listen({ port: 0, host: LOOPBACK }, () => resolve(server));
      }),
    ),
  );
  const ports = servers.map((server) => server.address().port);
  await Promise.all(servers.map((server) => new Promise((resolve) => server.close(resolve))));
  return ports;
}

/** Whether something accepts connections on the port of loopback now. */
export function accepts(port) {
  return new Promise((resolve) => {
    const socket = net.connect({ port, host: LOOPBACK });
    const answer = (yes) => { socket.destroy(); resolve(yes); };
    socket.once("connect", () => answer(true));
    socket.once("error", () => answer(false));
    socket.setTimeout(2_000, () => answer(false));
  });
}
