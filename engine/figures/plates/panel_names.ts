/** Names of the panels that a plate may hold. */
export const panelNames = [
  "map",
  "trail",
  "model",
  "residual",
  "asymmetric",
  "half-one",
  "half-two",
  "spread",
  "significance",
  "resolution",
  "detection-limit",
  "radial-profile",
  "azimuth-profile",
  "stacked-profiles",
  "spectrum",
  "equivalent-width",
  "violet-red",
  "continuum",
  "velocity-curve",
  "diagnostic",
  "light-centre",
  "periodogram",
  "systemic-scan",
  "mass-plane",
  "inclination-plane",
  "disc-in-space",
  "coverage",
  "null-distribution",
] as const;

/** Name of a panel. */
export type PanelName = typeof panelNames[number];
