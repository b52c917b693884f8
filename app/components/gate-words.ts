interface Line {
  line: string;
  state: "met" | "open" | "failed" | "conceded";
}

const numberWords = ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine", "ten", "eleven", "twelve"];

/** Small counts as words, larger ones as figures. */
export function countWord(count: number): string {
  return numberWords[count] ?? String(count);
}

/**
 * How the gate's answer is said: "No-go, for two reasons" and what to make of the rest.
 * Takes the verdict as given; it never judges.
 *
 * @param blocked reasons beside the lines, such as a revision that was set aside
 */
export function verdictSentence(verdict: "go" | "no-go", lines: readonly Line[], blocked = 0): { sentence: string; rest: string } {
  const count = (state: Line["state"]) => lines.filter((line) => line.state === state).length;
  const conceded = count("conceded");
  if (verdict === "go") {
    return conceded
      ? { sentence: "Go, with a concession", rest: `${countWord(conceded)} ${conceded === 1 ? "line is" : "lines are"} conceded, every other line is met.`.replace(/^./, upper) }
      : { sentence: "Go", rest: "Every line is met." };
  }
  const reasons = count("failed") + count("open") + blocked;
  const met = count("met") + conceded;
  const sentence = reasons === 0 ? "No-go" : `No-go, for ${reasons === 1 ? "one reason" : `${countWord(reasons)} reasons`}`;
  return { sentence, rest: met === 0 ? "Nothing is shown yet." : "Everything else stands." };
}

function upper(letter: string): string {
  return letter.toUpperCase();
}
