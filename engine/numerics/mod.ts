/**
 * Numerical methods that know nothing about stars: least squares, differential equations,
 * distribution tails, robust statistics, random streams.
 *
 * @module
 */
export * from "./chi_square.ts";
export * from "./dense_matrix.ts";
export * from "./distribution_tails.ts";
export * from "./fourier.ts";
export * from "./gauss_legendre.ts";
export * from "./information_criteria.ts";
export * from "./kolmogorov.ts";
export * from "./least_squares_fit.ts";
export * from "./linear_least_squares.ts";
export * from "./minimise.ts";
export * from "./non_negative.ts";
export * from "./ode.ts";
export * from "./periodic.ts";
export * from "./poisson.ts";
export * from "./random_stream.ts";
export * from "./robust.ts";
export * from "./root.ts";
export * from "./scalar_minimum.ts";
