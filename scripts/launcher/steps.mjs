const LABEL_WIDTH = 58;

const seconds = (from) => `${((performance.now() - from) / 1000).toFixed(2).padStart(7)} s`;

/**
 * Runs one step and prints it as one line with the time it took.
 *
 * @param {string} label what is done, in words of who waits for it
 * @param {() => Promise<string | void> | string | void} work may return a remark that is printed behind the label
 */
export async function step(label, work) {
  const from = performance.now();
  // On a terminal the label stands there while the step runs; elsewhere a line is whole.
  if (process.stdout.isTTY) process.stdout.write(`${label} …`);
  const line = (text) => (process.stdout.isTTY ? `\r\x1b[2K${text}` : text);
  try {
    const remark = await work();
    console.log(line(`${(remark ? `${label}: ${remark}` : label).padEnd(LABEL_WIDTH)} ${seconds(from)}`));
  } catch (error) {
    console.log(line(`${`${label}: FAILED`.padEnd(LABEL_WIDTH)} ${seconds(from)}`));
    throw error;
  }
}

/** A fault that a person can act on: its message is all they need, a stack would only hide it. */
export class Refusal extends Error {}

/** Prints what went wrong: the words for a Refusal, with the stack for a fault of our own. */
export function printFault(error) {
  console.error(error instanceof Refusal ? `\n${error.message}` : error);
}
