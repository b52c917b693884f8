/** The letters ASME Y14.35 leaves for revisions: without I, O, Q, S, X and Z, which are misread. */
export const releaseLetters = "ABCDEFGHJKLMNPRTUVWY";

/**
 * Which letter does the next release of a part take? A to Y, then AA, AB … AY, BA … YY, AAA.
 *
 * @param previous the part's last letter; null before the first release
 * @throws RangeError when `previous` is not made of these letters
 */
export function nextReleaseLetter(previous: string | null): string {
  if (previous === null) return releaseLetters[0]!;
  if (previous === "") throw new RangeError("an empty text is not a release letter");
  const digits = [...previous].map((letter) => {
    const digit = releaseLetters.indexOf(letter);
    if (digit < 0) throw new RangeError(`${JSON.stringify(previous)} is not a release letter: ${letter} is not used`);
    return digit;
  });
  for (let place = digits.length - 1; place >= 0; place--) {
    if (digits[place]! < releaseLetters.length - 1) {
      digits[place]! += 1;
      return digits.map((digit) => releaseLetters[digit]!).join("");
    }
    digits[place] = 0;
  }
  return releaseLetters[0]! + digits.map((digit) => releaseLetters[digit]!).join("");
}
