/**
 * Money is a whole number of minor units (cents, öre, yen) and a currency code of ISO 4217; it is
 * never a fraction, so sums are exact.
 */
function checked(amountMinor: number): number {
  if (!Number.isSafeInteger(amountMinor)) throw new RangeError(`${amountMinor} is not a whole number of minor units`);
  return amountMinor;
}

/** Is this the code of a currency in use? */
export const isCurrency = (code: string): boolean => Intl.supportedValuesOf("currency").includes(code);

/** How many decimals a currency is written with: USD 2, JPY 0, KWD 3. */
export function currencyDecimals(currency: string): number {
  return new Intl.NumberFormat("en", { style: "currency", currency }).resolvedOptions().maximumFractionDigits ?? 2;
}

/**
 * An amount for people: "USD 1,250.00". The code stands in front because a dollar sign does not say whose dollars.
 *
 * @throws RangeError for an amount that is not a safe whole number, or a code that is not one
 */
export function formatMoney(amountMinor: number, currency: string): string {
  checked(amountMinor);
  const digits = currencyDecimals(currency);
  // By text, not by division: 900719925474099.1 has no cents left in binary.
  const padded = String(Math.abs(amountMinor)).padStart(digits + 1, "0");
  const whole = padded.slice(0, padded.length - digits).replace(/\B(?=(\d{3})+$)/g, ",");
  const fraction = digits === 0 ? "" : `.${padded.slice(-digits)}`;
  return `${currency} ${amountMinor < 0 ? "-" : ""}${whole}${fraction}`;
}

/**
 * What a person typed ("1250", "1,250.00", "1250.5") in minor units; null when it is no amount, or
 * has more decimals than the currency. The comma only groups thousands.
 */
export function parseMoney(text: string, currency: string): number | null {
  const match = /^(\d{1,3}(?:,\d{3})+|\d+)(?:\.(\d+))?$/.exec(text.trim());
  if (match === null) return null;
  const digits = currencyDecimals(currency);
  const fraction = match[2] ?? "";
  if (fraction.length > digits) return null;
  const amount = Number(match[1]!.replaceAll(",", "") + fraction.padEnd(digits, "0"));
  return Number.isSafeInteger(amount) ? amount : null;
}

/** An amount as it stands in an entry field: "1250.50", without code and grouping; `parseMoney` reads it again. */
export function amountText(amountMinor: number, currency: string): string {
  return formatMoney(amountMinor, currency).slice(currency.length + 1).replaceAll(",", "");
}

/**
 * Exact sum of minor units of one currency; a refund is negative.
 *
 * @throws RangeError when an amount or the sum is not a safe whole number
 */
export function sumMoney(amountsMinor: readonly number[]): number {
  return amountsMinor.reduce((sum, amount) => checked(sum + checked(amount)), 0);
}

export interface DepositStanding {
  paid_minor: number;
  /** Never below zero. */
  left_minor: number;
  settled: boolean;
}

/**
 * Does what was paid reach the agreed deposit? Payments in another currency are refused, since no
 * rate is known here.
 *
 * @throws RangeError for amounts that are no whole numbers, an agreed amount below zero, or mixed currencies
 */
export function depositStanding(
  agreed: { amount_minor: number; currency: string },
  payments: readonly { amount_minor: number; currency: string }[],
): DepositStanding {
  if (checked(agreed.amount_minor) < 0) throw new RangeError("an agreed deposit can't be below zero");
  const other = payments.find((payment) => payment.currency !== agreed.currency);
  if (other !== undefined) throw new RangeError(`a payment in ${other.currency} can't count towards a deposit in ${agreed.currency}`);
  const paid = sumMoney(payments.map((payment) => payment.amount_minor));
  const left = Math.max(0, agreed.amount_minor - paid);
  return { paid_minor: paid, left_minor: left, settled: left === 0 };
}
