import net from "node:net";

const LOOPBACK = "127.0.0.1";

/** Listens on a port of loopback (0: any); undefined if it is taken or not ours to use. */
function listen(port) {
  return new Promise((resolve) => {
    const server = net.createServer((socket) => socket.destroy());
    server.once("error", () => resolve(undefined));
    server.listen({ port, host: LOOPBACK, exclusive: true }, () => resolve(server));
  });
}

const close = (server) => new Promise((resolve) => server.close(resolve));

/**
 * Holds a free port of loopback until it is released: the wanted one, else the next free one
 * after it; without a wish (0) any.
 *
 * @returns {Promise<{ port: number, release: () => Promise<void> }>}
 */
export async function holdPort(wanted = 0, avoid = new Set()) {
  const wishes = wanted === 0 ? [] : Array.from({ length: 200 }, (_, i) => wanted + i).filter((port) => port < 65_536 && !avoid.has(port));
  for (const wish of [...wishes, 0]) {
    const server = await listen(wish);
    if (server) return { port: server.address().port, release: () => close(server) };
  }
  throw new Error("no port of loopback is free");
}

/**
 * A port of loopback that is free now, chosen as `holdPort` does. Somebody else may take it
 * before it is used; who listens on it must be ready to ask again.
 */
export async function freePort(wanted = 0, avoid = new Set()) {
  const held = await holdPort(wanted, avoid);
  await held.release();
  return held.port;
}

/** Several ports that are free now and differ, none of them wished for. */
export async function freePorts(count) {
  const held = await Promise.all(Array.from({ length: count }, () => holdPort()));
  await Promise.all(held.map(({ release }) => release()));
  return held.map(({ port }) => port);
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
