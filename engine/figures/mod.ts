/**
 * Figures: one display list in points, drawn as SVG, PNG and PDF; the panels that fill it; and the
 * plates made of panels.
 *
 * @module
 */
export * from "./axes.ts";
export * from "./cells.ts";
export * from "./colour/colour_bar.ts";
export * from "./colour/colour_map.ts";
export * from "./colour/colour_scale.ts";
export * from "./colour/lab.ts";
export * from "./colour/limits.ts";
export * from "./colour/stretch.ts";
export * from "./display_list.ts";
export * from "./font_metrics.ts";
export * from "./fonts.ts";
export * from "./line_label.ts";
export * from "./marks.ts";
export * from "./panels/binary_marks.ts";
export * from "./panels/exposure_ring.ts";
export * from "./panels/folded_grid.ts";
export * from "./panels/map_overlay.ts";
export * from "./panels/map_panel.ts";
export * from "./panels/map_place.ts";
export * from "./panels/trail_panel.ts";
export * from "./pdf.ts";
export * from "./plates/standard_description.ts";
export * from "./plates/standard_layout.ts";
export * from "./plates/standard_plate.ts";
export * from "./png.ts";
export * from "./png_file.ts";
export * from "./runs.ts";
export * from "./style.ts";
export * from "./svg.ts";
