import type { Ephemeris } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import type { TrailDescription } from "./describe_trail.ts";

/** What an observer should be told of a trail, and what follows for its map. */
export function trailAdvice(
  description: Omit<TrailDescription, "warnings">,
  ephemeris: Ephemeris,
): Warning[] {
  const { line, coverage, smear_kms, resolution_kms, velocity_kms } = description;
  const { directions_needed, directions_observed, phase_error, phase_error_kms, net } = description;
  const warnings: Warning[] = [];
  const warn = (code: string, text: string) => warnings.push({ code, text, line });
  if (coverage.largest_half_gap > 0.08) {
    warn(
      "phase-gap",
      `no exposure covers ${
        (100 * (1 - coverage.covered_half_fraction)).toFixed(0)
      } % of the half orbit, ${
        coverage.largest_half_gap.toFixed(2)
      } cycles at a stretch: a map will show streaks`,
    );
  }
  if (smear_kms.median > 1.5 * resolution_kms.median) {
    warn(
      "smeared",
      `a feature at ${velocity_kms.toFixed(0)} km/s moves by ${
        smear_kms.median.toFixed(0)
      } km/s within an exposure, ${
        (smear_kms.median / resolution_kms.median).toFixed(1)
      } resolution elements: shorter exposures would show more`,
    );
  }
  if (directions_observed < 0.7 * directions_needed) {
    warn(
      "few-exposures",
      `exposures fall into ${directions_observed} of the ${directions_needed} steps of half an orbit (π × ${
        velocity_kms.toFixed(0)
      } / ${resolution_kms.median.toFixed(0)} km/s) from one to the next of which a feature at ${
        velocity_kms.toFixed(0)
      } km/s moves by one resolution element: at that velocity a map will be coarser than the spectra, or show streaks`,
    );
  }
  if (phase_error_kms > resolution_kms.median) {
    warn(
      "phase-uncertain",
      `the ephemeris leaves the phase uncertain by ${
        phase_error.toFixed(3)
      } cycles: the map may be turned by ${(360 * phase_error).toFixed(0)} deg, ${
        phase_error_kms.toFixed(0)
      } km/s at ${velocity_kms.toFixed(0)} km/s`,
    );
  }
  if (ephemeris.zero_marks === "emission-crossing") {
    warn(
      "zero-not-donor",
      "the zero of phase is not the donor's conjunction: maps are rotated by an unknown angle and no structures are named",
    );
  }
  if (net === "absorption") {
    warn(
      "line-in-absorption",
      "the line is net in absorption: entropy maps it with its sign turned, which is right only where it is nowhere above the continuum; back-projection and signed total variation take both signs",
    );
  }
  if (net === "emission with absorption core") {
    warn(
      "absorption-core",
      "the mean profile falls below the continuum: entropy maps cannot be negative and will put a hole or a ring there; back-projection and signed total variation show it as negative light",
    );
  }
  return warnings;
}
