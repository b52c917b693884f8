import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { accepts, freePort } from "./ports.mjs";
import { endInWords, lastLines, startChild, untilReady } from "./processes.mjs";
import { ROOT } from "./house.mjs";

const FIRST_PAUSE_MS = 500;
const LONGEST_PAUSE_MS = 30_000;
/** Who lived this long did not die of its start. */
const SETTLED_MS = 60_000;

/**
 * The long-running Node processes of one stack: started on free ports, watched, started again
 * when they die, stopped together.
 */
export function createServices({ logs, report = console.log, onChange = () => {} }) {
  const handles = new Map();
  const usedPorts = new Set();
  let stopping = false;
  let tellVitalEnd;
  /** Resolves with what to say when something died without which nothing works. */
  const vitalEnd = new Promise((resolve) => { tellVitalEnd = resolve; });

  function spawnNode({ name, args, env }) {
    const handle = startChild({ name, command: process.execPath, args: ["--import", "tsx", ...args], env, cwd: ROOT, logFile: path.join(logs, `${name.replaceAll(" ", "-")}.log`) });
    handles.set(name, handle);
    onChange();
    return handle;
  }

  /** Watches a child until it is stopped on purpose. */
  function watch(handle, { vital, again }) {
    const since = Date.now();
    void handle.ended.then(async (how) => {
      if (stopping || handle.stopping) return;
      const what = `The ${handle.name} ended unexpectedly (${endInWords(how)})`;
      if (vital) return tellVitalEnd(`${what}. It said last:\n${lastLines(handle.logFile)}`);
      await again(what, Date.now() - since > SETTLED_MS);
    });
  }

  /** Starts a service whose place is known, and keeps it running. */
  async function keep(spec, pauseMs = FIRST_PAUSE_MS) {
    const handle = spawnNode(spec);
    watch(handle, {
      vital: spec.vital,
      again: async (what, settled) => {
        const pause = settled ? FIRST_PAUSE_MS : pauseMs;
        report(`${what}; starting it again in ${pause / 1000} s. Its log: ${path.relative(ROOT, handle.logFile)}`);
        await sleep(pause, undefined, { ref: false });
        if (!stopping) await keep(spec, Math.min(pause * 2, LONGEST_PAUSE_MS));
      },
    });
    return handle;
  }

  /**
   * Starts a service on the wanted ports or the next free ones, and waits until it listens.
   *
   * @param {object} spec
   * @param {string} spec.name
   * @param {number[]} spec.wanted 0 takes any
   * @param {(...ports: number[]) => { args: string[], env: object }} spec.with
   * @param {boolean} [spec.vital] its death stops the whole stack instead of a new start
   * @param {(...ports: number[]) => Promise<boolean>} [spec.isReady]
   * @returns {Promise<number[]>} the ports it listens on
   */
  async function serve({ name, wanted, with: given, vital = false, isReady = accepts }) {
    for (let attempt = 1; ; attempt++) {
      const ports = [];
      for (const wish of wanted) {
        const port = await freePort(wish === 0 ? 0 : wish, usedPorts);
        usedPorts.add(port);
        ports.push(port);
      }
      const spec = { name, vital: false, ...given(...ports) };
      const handle = spawnNode(spec);
      try {
        await untilReady(handle, () => isReady(...ports));
      } catch (error) {
        await handle.stop();
        // Somebody took the port between our looking and its listening.
        if (attempt < 5 && /EADDRINUSE/.test(error.message) && !stopping) continue;
        throw error;
      }
      watch(handle, {
        vital,
        again: async (what) => {
          report(`${what}; starting it again. Its log: ${path.relative(ROOT, handle.logFile)}`);
          await sleep(FIRST_PAUSE_MS, undefined, { ref: false });
          if (!stopping) await keep(spec);
        },
      });
      return ports;
    }
  }

  return {
    serve,
    keep,
    vitalEnd,
    get: (name) => handles.get(name),
    /** Who runs now, to be ended by the next start should this one be killed. */
    running: () => [...handles.values()].filter(({ running }) => running).map(({ name, identity }) => ({ name, ...identity })),
    /** Those that ask are stopped before those that are asked. */
    stop: async (order) => {
      stopping = true;
      for (const names of order) await Promise.all(names.map((name) => handles.get(name)?.stop()));
      await Promise.all([...handles.values()].map((handle) => handle.stop()));
    },
  };
}
