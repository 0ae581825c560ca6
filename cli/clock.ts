/** The time now, ISO 8601 in UTC, for the provenance. */
export function utcNow(): string {
  return new Date().toISOString();
}
