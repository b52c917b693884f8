const PARENT_CHECK_MS = 300;

/**
 * Calls back once when we are to stop: by Ctrl-C, by a signal, by the terminal closing, or
 * because the npm that started us is gone. npm hands a SIGTERM to its shell only, which dies
 * of it and leaves us behind; that we now have another parent is all there is to see.
 *
 * @param {() => void} stop
 */
export function onStop(stop) {
  let told = false;
  const tell = () => {
    if (told) return;
    told = true;
    stop();
  };
  // They stay registered: a second Ctrl-C must not cut the tidying up short.
  for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"]) process.on(signal, tell);
  if (process.env.npm_lifecycle_event === undefined) return;
  const parent = process.ppid;
  const watch = setInterval(() => {
    if (process.ppid === parent) return;
    clearInterval(watch);
    tell();
  }, PARENT_CHECK_MS);
  watch.unref();
}
