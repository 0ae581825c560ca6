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
export * from "./panels/coverage_panel.ts";
export * from "./panels/diagnostic_panel.ts";
export * from "./panels/disc_space_panel.ts";
export * from "./panels/exposure_ring.ts";
export * from "./panels/folded_grid.ts";
export * from "./panels/light_centre_panel.ts";
export * from "./panels/map_contours.ts";
export * from "./panels/map_family.ts";
export * from "./panels/map_marks.ts";
export * from "./panels/map_overlay.ts";
export * from "./panels/map_panel.ts";
export * from "./panels/map_profile.ts";
export * from "./panels/map_profile_panel.ts";
export * from "./panels/map_window.ts";
export * from "./panels/phase_curve_panel.ts";
export * from "./panels/plane_panel.ts";
export * from "./panels/plot_panel.ts";
export * from "./panels/scan_panel.ts";
export * from "./panels/spectrum_panel.ts";
export * from "./panels/stacked_profiles_panel.ts";
export * from "./panels/trail_panel.ts";
export * from "./panels/velocity_curve_panel.ts";
export * from "./pdf.ts";
export * from "./plates/draw_plate.ts";
export * from "./plates/map_heading.ts";
export * from "./plates/map_kinds.ts";
export * from "./plates/panel_kind.ts";
export * from "./plates/panel_kinds.ts";
export * from "./plates/panel_names.ts";
export * from "./plates/plate_description.ts";
export * from "./plates/plate_layout.ts";
export * from "./plates/plate_subject.ts";
export * from "./plates/plot_kinds.ts";
export * from "./plates/standard_plate.ts";
export * from "./plates/trail_kinds.ts";
export * from "./plot_layer.ts";
export * from "./png.ts";
export * from "./png_file.ts";
export * from "./runs.ts";
export * from "./style.ts";
export * from "./svg.ts";
