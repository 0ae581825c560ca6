/** The parts a model may have, in the order in which they are summed. */
export type PartName = "disc" | "spot" | "stream" | "donor" | "accretor" | "outflow";

/**
 * What a binary's line emission is made of: plain data, as the `[model]` section of a target file.
 * Only the parts named in `parts` shine; a section without its part still says where things are (a
 * spot needs the disc's rim). Radii are in units of the separation, equivalent widths and
 * velocities in km/s, angles in degrees. Equivalent widths are relative to the continuum out of
 * eclipse and, where the light varies with phase, averaged over one orbit.
 */
export interface Model {
  /** Parts that contribute. */
  readonly parts: readonly PartName[];
  /** The Keplerian disc. @default {{}} */
  readonly disc?: DiscModel;
  /** The bright spot where the stream strikes the rim. @default {{}} */
  readonly spot?: SpotModel;
  /** The ballistic stream. @default {{}} */
  readonly stream?: StreamModel;
  /** The Roche-filling donor. @default {{}} */
  readonly donor?: DonorModel;
  /** The accretor's own line. @default {{}} */
  readonly accretor?: AccretorModel;
  /** The outflow. @default {{}} */
  readonly outflow?: OutflowModel;
  /** Eclipse by the donor. @default {{}} */
  readonly eclipse?: EclipseModel;
}

/** A Keplerian disc about the accretor (Smak 1981, Acta Astr. 31, 395). */
export interface DiscModel {
  /** Equivalent width, km/s; negative for a line in absorption. @default {3000} */
  readonly equivalent_width_kms?: number;
  /** Inner radius, a. @default {0.05} */
  readonly inner_radius_over_a?: number;
  /** Outer radius, a. @default {0.3} */
  readonly outer_radius_over_a?: number;
  /** β of the emissivity per unit area r^−β. @default {1.5} */
  readonly emissivity_index?: number;
  /** `thick` broadens by shear (Horne & Marsh 1986, MNRAS 218, 761); needs the inclination. @default {"thin"} */
  readonly optical_depth?: "thin" | "thick";
  /** k in κ = k sin i tan i of the thick disc; see {@linkcode shearStrength}. @default {2} */
  readonly shear_coefficient?: number;
  /** Standard deviation of turbulence at the outer edge, km/s. @default {0} */
  readonly turbulence_kms?: number;
  /** p of turbulence ∝ (r / outer radius)^−p. @default {0} */
  readonly turbulence_index?: number;
  /** Rotation over Keplerian rotation. @default {1} */
  readonly keplerian_factor?: number;
  /** Eccentricity of confocal elliptical orbits (Statler 2001, AJ 122, 2257). @default {0} */
  readonly eccentricity?: number;
  /** Azimuth of periastron, degrees from the donor's direction along the orbital motion. @default {0} */
  readonly periastron_deg?: number;
  /** Amplitude of the one-armed (m = 1) modulation of brightness with azimuth. @default {0} */
  readonly one_armed_amplitude?: number;
  /** Azimuth at which the one-armed pattern is brightest, degrees. @default {0} */
  readonly one_armed_deg?: number;
  /** Amplitude of the two-armed (m = 2) modulation of brightness with azimuth. @default {0} */
  readonly two_armed_amplitude?: number;
  /** Azimuth of one arm at the outer edge, degrees. @default {0} */
  readonly two_armed_deg?: number;
  /** Pitch angle of the trailing arms, degrees; 90: straight radial arms. @default {90} */
  readonly two_armed_pitch_deg?: number;
  /** Equivalent width of the absorption core of an opaque disc, km/s, positive. @default {0} */
  readonly core_equivalent_width_kms?: number;
  /** Radius of the bright opaque surface in front of which the rim absorbs, a. @default {0.1} */
  readonly core_radius_over_a?: number;
}

/** The bright spot, where the ballistic stream meets the rim (Lubow & Shu 1975, ApJ 198, 383). */
export interface SpotModel {
  /** Equivalent width, km/s. @default {300} */
  readonly equivalent_width_kms?: number;
  /** Radius of the impact, a; null: the disc's outer radius. @default {null} */
  readonly radius_over_a?: number | null;
  /** Velocity from the stream's own (0) to the Keplerian one of the rim (1). @default {0} */
  readonly mixing?: number;
  /** Standard deviation of the spot's own velocities, km/s. @default {50} */
  readonly sigma_kms?: number;
  /** Length of the tail along the rim downstream, as the angle over which it fades by e, degrees. @default {0} */
  readonly tail_deg?: number;
  /** Amplitude A of beaming: light ∝ 1 + A cos 2π(φ − beaming_phase). @default {0} */
  readonly beaming?: number;
  /** Phase at which a beamed spot is brightest, cycles. @default {0.85} */
  readonly beaming_phase?: number;
}

/** Emission along the ballistic stream. */
export interface StreamModel {
  /** Equivalent width, overflow included, km/s. @default {150} */
  readonly equivalent_width_kms?: number;
  /** Distance from the accretor at which it begins to shine, a; null: at L1. @default {null} */
  readonly from_radius_over_a?: number | null;
  /** n of the brightness per unit length of path ∝ (r/a)^−n. @default {0} */
  readonly brightness_index?: number;
  /** Brightness beyond the rim, relative to the same law. @default {0} */
  readonly overflow?: number;
  /** Distance from the accretor at which overflow ends, a; null: the closest approach. @default {null} */
  readonly overflow_radius_over_a?: number | null;
  /** Standard deviation of local velocities, km/s. @default {40} */
  readonly sigma_kms?: number;
}

/** The donor's surface, filling its Roche lobe. */
export interface DonorModel {
  /** Equivalent width of the emission, or of the absorption, positive, km/s. @default {150} */
  readonly equivalent_width_kms?: number;
  /** Emission of the face that the accretor heats, or absorption of the photosphere. @default {"irradiated"} */
  readonly light?: "irradiated" | "photospheric";
  /** Half opening angle of the disc whose shadow falls on the donor, degrees. @default {5} */
  readonly disc_opening_deg?: number;
  /** Share of the absorption that heating takes away from the face that it reaches. @default {0} */
  readonly quenching?: number;
  /** ε of the linear law of limb darkening. @default {0.5} */
  readonly limb_darkening?: number;
  /** β of gravity darkening T ∝ g^β (Lucy 1967: 0.08 for convective envelopes). @default {0.08} */
  readonly gravity_darkening?: number;
  /** Standard deviation of local velocities, km/s. @default {10} */
  readonly sigma_kms?: number;
  /** Local profile of the line, in place of the Gaussian of `sigma_kms`. @default {null} */
  readonly template?: LineTemplate | null;
}

/** A local line profile, as from the spectrum of a slowly rotating star: its depth against velocity. */
export interface LineTemplate {
  /** Velocities, increasing, evenly spaced or not, km/s. */
  readonly velocity_kms: ArrayLike<number>;
  /** Depth below the continuum at each, in any unit: only its shape counts. */
  readonly depth: ArrayLike<number>;
}

/** A narrow line that moves with the accretor. */
export interface AccretorModel {
  /** Equivalent width, km/s. @default {100} */
  readonly equivalent_width_kms?: number;
  /** Standard deviation, km/s. @default {50} */
  readonly sigma_kms?: number;
  /** Gravitational redshift, km/s. @default {0} */
  readonly redshift_kms?: number;
}

/** A broad pedestal of outflowing gas and its P Cygni trough, both moving with the accretor. */
export interface OutflowModel {
  /** Equivalent width of the pedestal, km/s. @default {500} */
  readonly equivalent_width_kms?: number;
  /** Standard deviation of the pedestal, km/s. @default {800} */
  readonly sigma_kms?: number;
  /** Equivalent width of the trough, positive, km/s. @default {0} */
  readonly trough_equivalent_width_kms?: number;
  /** Speed of approach at the trough's middle, km/s. @default {1500} */
  readonly trough_speed_kms?: number;
  /** Standard deviation of the trough, km/s. @default {400} */
  readonly trough_sigma_kms?: number;
}

/** Eclipse by the donor. Shares of the continuum need not add up to one: the rest is never hidden. */
export interface EclipseModel {
  /** Whether the donor hides what lies behind it; needs the inclination. @default {false} */
  readonly enabled?: boolean;
  /** Share of the continuum that comes from the accretor. @default {0} */
  readonly continuum_accretor?: number;
  /** Share of the continuum that comes from the disc. @default {0} */
  readonly continuum_disc?: number;
  /** β of the disc's continuum per unit area r^−β. @default {2} */
  readonly continuum_index?: number;
  /** Share of the continuum that comes from the bright spot. @default {0} */
  readonly continuum_spot?: number;
}
