const POWERS_OF_TEN = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

/**
 * What number does this word spell, rounded as IEEE 754 asks?
 *
 * Up to 2^53 in the digits and 22 in the exponent both are exact in binary, so one
 * multiplication or division rounds once (Clinger, "How to read floating point numbers
 * accurately", 1990: the simple case); the rest goes to the language's own reading.
 *
 * @returns NaN unless the whole word is a decimal number: sign, digits, point, exponent, nothing else
 */
export function parseDecimal(bytes: Uint8Array, from: number, to: number): number {
  let at = from;
  const sign = bytes[at];
  if (sign === 0x2d || sign === 0x2b) at++;
  let mantissa = 0;
  let digits = 0;
  let exponent = 0;
  for (; at < to; at++, digits++) {
    const digit = bytes[at]! - 48;
    if (!(digit >= 0 && digit <= 9)) break;
    mantissa = mantissa * 10 + digit;
  }
  if (at < to && bytes[at] === 0x2e) {
    for (at++; at < to; at++, digits++, exponent--) {
      const digit = bytes[at]! - 48;
      if (!(digit >= 0 && digit <= 9)) break;
      mantissa = mantissa * 10 + digit;
    }
  }
  if (digits === 0) return NaN;
  if (at < to && (bytes[at]! | 0x20) === 0x65) {
    at++;
    const exponentSign = bytes[at];
    if (exponentSign === 0x2d || exponentSign === 0x2b) at++;
    const start = at;
    let power = 0;
    for (; at < to; at++) {
      const digit = bytes[at]! - 48;
      if (!(digit >= 0 && digit <= 9)) break;
      power = power * 10 + digit;
    }
    if (at === start) return NaN;
    exponent += exponentSign === 0x2d ? -power : power;
  }
  if (at !== to) return NaN;
  let value: number;
  if (mantissa < 9007199254740992 && exponent >= -22 && exponent <= 22) {
    value = exponent < 0 ? mantissa / POWERS_OF_TEN[-exponent]! : mantissa * POWERS_OF_TEN[exponent]!;
  } else {
    let text = "";
    for (let i = sign === 0x2d || sign === 0x2b ? from + 1 : from; i < to; i++) text += String.fromCharCode(bytes[i]!);
    value = Number(text);
  }
  return sign === 0x2d ? -value : value;
}
