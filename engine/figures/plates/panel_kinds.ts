import { mapKinds } from "./map_kinds.ts";
import type { PanelKind } from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import { plotKinds } from "./plot_kinds.ts";
import { realityKinds } from "./reality_kinds.ts";
import { studyKinds } from "./study_kinds.ts";
import { trailKinds } from "./trail_kinds.ts";

/** Every panel that a plate may hold, by name. */
export const panelKinds: Readonly<Record<PanelName, PanelKind>> = {
  ...mapKinds,
  ...studyKinds,
  ...realityKinds,
  ...trailKinds,
  ...plotKinds,
};
