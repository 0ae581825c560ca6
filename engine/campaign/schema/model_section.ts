import { z } from "zod";
import { type Model, modelParameters, type ModelSection, partNames } from "../../synthesis/mod.ts";

const WORDS: Readonly<Record<string, z.ZodType>> = {
  "disc.optical_depth": z.enum(["thin", "thick"]),
  "donor.light": z.enum(["irradiated", "photospheric"]),
  // A file: the step that needs it reads it into the model.
  "donor.template": z.string().min(1),
  "eclipse.enabled": z.boolean(),
};

const part = z.enum(partNames as [string, ...string[]]);

/** Keys and ranges of a section come from the model's own table: one place says them. */
function section(name: ModelSection): z.ZodType {
  const numbers = modelParameters.filter((parameter) => parameter.section === name)
    .map(({ key, low, high }) => [key, z.number().gte(low).lte(high).optional()] as const);
  const words = Object.entries(WORDS).filter(([key]) => key.startsWith(`${name}.`))
    .map(([key, schema]) => [key.slice(name.length + 1), schema.optional()] as const);
  return z.strictObject(Object.fromEntries([...numbers, ...words])).optional();
}

/** Schema of `[model]`: what the emission is made of. */
export const modelSection: z.ZodType<Model> = z.strictObject({
  parts: z.array(part).min(1).default(["disc"]),
  disc: section("disc"),
  spot: section("spot"),
  stream: section("stream"),
  donor: section("donor"),
  accretor: section("accretor"),
  outflow: section("outflow"),
  eclipse: section("eclipse"),
}) as unknown as z.ZodType<Model>;
