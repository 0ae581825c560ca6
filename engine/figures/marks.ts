/** Name that every file of ours carries, by which our own files are known again. */
export const SOFTWARE = "Millrace";

/** Facts kept in a figure's metadata, as name and value: version, digests, target. */
export type Metadata = Readonly<Record<string, string>>;
