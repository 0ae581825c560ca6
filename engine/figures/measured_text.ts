/**
 * A measured value with as many digits as its error justifies: the error to two significant digits
 * and the value to the same place.
 *
 * @param value The value.
 * @param error One standard deviation; null when not known: then four significant digits.
 * @returns As in "70.1 ± 2.3".
 *
 * @example
 * ```ts
 * import { measuredText } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(measuredText(70.1234, 2.34), "70.1 ± 2.3");
 * assertEquals(measuredText(-1234.5, 123), "−1230 ± 120");
 * assertEquals(measuredText(0.08237142, 4.4e-7), "0.08237142 ± 0.00000044");
 * assertEquals(measuredText(3.14159, null), "3.142");
 * ```
 */
export function measuredText(value: number, error: number | null): string {
  if (!Number.isFinite(value)) return "none";
  if (error === null || !Number.isFinite(error) || error <= 0) {
    return minus(String(Number(value.toPrecision(4))));
  }
  // 0.0996 to two digits is 0.10: the place follows from the rounded error.
  const rounded = Number(error.toPrecision(2));
  const place = 1 - Math.floor(Math.log10(rounded));
  const write = (number: number) => {
    const unit = 10 ** place;
    return place > 0 ? number.toFixed(place) : String(Math.round(number * unit) / unit);
  };
  return `${minus(write(value))} ± ${write(error)}`;
}

function minus(text: string): string {
  return text.replace("-", "−");
}
