import { z } from "zod";

/** A finite number. */
export const number: z.ZodNumber = z.number();

/** A finite number above zero. */
export const positive: z.ZodNumber = z.number().positive();

/** A finite number, zero or above. */
export const nonNegative: z.ZodNumber = z.number().nonnegative();

/** A whole number above zero. */
export const count: z.ZodNumber = z.number().int().positive();

/** A full Julian date of our time. */
export const julianDate: z.ZodNumber = z.number().gte(2_400_000).lte(2_500_000);

/** Two increasing numbers. */
export const range: z.ZodType<[number, number]> = z.tuple([z.number(), z.number()]).refine(
  ([low, high]) => low < high,
  { error: "must be two increasing numbers" },
);

/** Text that is not empty. */
export const text: z.ZodString = z.string().min(1);
