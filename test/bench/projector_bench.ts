// Forward and adjoint on the geometry of peers.py: `deno task bench`.
import { makeProjector } from "@millrace/millrace/tomography";
import { benchSampling, SIZES } from "../tomography/samplings.ts";

for (const size of Object.keys(SIZES) as (keyof typeof SIZES)[]) {
  const { sampling, pixels } = benchSampling(size);
  const shape = { pixels, half_width_kms: 1000, systemic_kms: 13.7 };
  const map = Float64Array.from({ length: pixels * pixels }, (_, k) => 1 + Math.sin(k));
  for (
    const [name, options] of [
      ["WebAssembly, double", {}],
      ["WebAssembly, single", { precision: "single" }],
      ["TypeScript", { method: "plain" }],
    ] as const
  ) {
    const projector = makeProjector(sampling, { ...shape, ...options });
    const data = new Float64Array(projector.sample_count);
    const image = new Float64Array(projector.image_size);
    Deno.bench({
      name: `forward + adjoint, ${size}, ${name}`,
      group: `projector ${size}`,
      fn: () => {
        projector.forward(map, data);
        projector.adjoint(data, image);
      },
    });
  }
}
