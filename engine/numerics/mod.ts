/**
 * Numerical methods that know nothing about stars: least squares, differential equations,
 * distribution tails, robust statistics, random streams.
 *
 * @module
 */
export * from "./chi_square.ts";
export * from "./distribution_tails.ts";
export * from "./information_criteria.ts";
export * from "./kolmogorov.ts";
export * from "./poisson.ts";
export * from "./random_stream.ts";
export * from "./robust.ts";
