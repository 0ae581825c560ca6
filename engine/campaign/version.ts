import settings from "../../deno.json" with { type: "json" };

/** Version of Millrace, as every output states it. */
export const VERSION: string = settings.version;
