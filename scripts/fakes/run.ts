/** A stand-in's life as a process: says in one line that it is ready, and ends when it is told to. */
export async function runUntilTold(start: () => Promise<{ says: Record<string, unknown>; stop: () => Promise<void> }>): Promise<void> {
  try {
    const { says, stop } = await start();
    console.log(JSON.stringify({ ready: true, ...says }));
    let stopping = false;
    for (const signal of ["SIGTERM", "SIGINT"] as const) {
      process.on(signal, () => {
        if (stopping) return;
        stopping = true;
        void stop().then(() => process.exit(0));
      });
    }
  } catch (error) {
    // The launcher reads the line, a person too; a stack would help neither.
    console.error(error instanceof Error ? error.message : String(error));
    process.exit(2);
  }
}

/** A port out of a command line; 0 takes any. */
export function portFrom(text: string | undefined, name: string): number {
  const port = Number(text);
  if (text === undefined || text === "" || !Number.isInteger(port) || port < 0 || port > 65_535) throw new Error(`--${name} must be a number from 0 to 65535.`);
  return port;
}
