/** Cases of a file of reference values, of one kind where there are several. */
// deno-lint-ignore no-explicit-any
export function casesOf(topic: string, kind?: string): any[] {
  const url = new URL(`../reference/${topic}.json`, import.meta.url);
  const { cases } = JSON.parse(Deno.readTextFileSync(url));
  // deno-lint-ignore no-explicit-any
  return kind === undefined ? cases : cases.filter((one: any) => one.kind === kind);
}
