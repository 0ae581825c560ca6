/**
 * Receives progress of a long computation. The engine never prints: the caller decides what to do.
 *
 * @param done Units of work done so far.
 * @param total Units of work in all.
 * @param what What is being done, as in "replicas".
 */
export type Progress = (done: number, total: number, what: string) => void;
