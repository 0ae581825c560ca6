import { assertEquals } from "@std/assert";
import { PNG } from "pngjs";
import { writtenByMillrace } from "@millrace/millrace/files";

const bytes = (text: string) => Uint8Array.from(text, (letter) => letter.charCodeAt(0));
const card = (text: string) => text.padEnd(80);
const fits = (...cards: string[]) =>
  bytes([card("SIMPLE  =                    T"), ...cards.map(card), card("END")].join(""));

const png = new Uint8Array(PNG.sync.write(new PNG({ width: 1, height: 1 })));
// A tEXt chunk after IHDR (8 + 25 bytes): length, type, text, and a checksum that nobody reads here.
const text = bytes("\0\0\0\x11tEXtSoftware\0Millrace\0\0\0\0");
const marked = new Uint8Array([...png.subarray(0, 33), ...text, ...png.subarray(33)]);

const cases: [name: string, content: Uint8Array, ours: boolean][] = [
  ["nothing", bytes(""), false],
  ["FITS with the card", fits("CREATOR = 'Millrace 0.1.0'     / who wrote this"), true],
  ["FITS without", fits("ORIGIN  = 'Millrace'"), false],
  ["FITS of another", fits("CREATOR = 'Millrace2000'"), false],
  ["FITS with the card after END", fits("END", "CREATOR = 'Millrace'"), false],
  ["FITS cut off", fits().subarray(0, 70), false],
  ["JSON with both keys", bytes('\n {"version": "0.1.0", "schema": "orbit/1"}'), true],
  ["JSON without version", bytes('{"schema": "orbit/1"}'), false],
  ["JSON with a schema address", bytes('{"schema": "http://x/1", "version": "1"}'), false],
  ["JSON broken", bytes('{"schema": "orbit/1", "version": "1"'), false],
  ["JSON list", bytes('["schema", "version"]'), false],
  [
    "ECSV with creator",
    bytes("# %ECSV 1.0\n# ---\n# meta:\n#   creator: Millrace 0.1.0\na\n"),
    true,
  ],
  ["ECSV, ordered map", bytes("# %ECSV 1.0\n# meta: !!omap\n# - {creator: Millrace}\na\n"), true],
  ["ECSV without", bytes("# %ECSV 1.0\n# ---\n# datatype: []\na\nMillrace\n"), false],
  ["PNG with the chunk", marked, true],
  ["PNG without", png, false],
  ["PNG cut off", marked.subarray(0, 40), false],
  ["PDF by creator", bytes("%PDF-1.7\n1 0 obj<</Creator (Millrace 0.1.0)>>"), true],
  ["PDF by XMP", bytes("%PDF-1.7\n<xmp:CreatorTool>Millrace 0.1.0</xmp:CreatorTool>"), true],
  ["PDF of another", bytes("%PDF-1.7\n1 0 obj<</Title (Millrace)>>"), false],
  ["SVG", bytes('<?xml version="1.0"?><svg><desc>Millrace 0.1.0</desc></svg>'), true],
  ["SVG of another", bytes("<svg></svg>"), false],
  ["HTML", bytes('<!doctype html><meta name="generator" content="Millrace">'), true],
  ["TOML that says so", bytes("# Written by Millrace 0.1.0.\nformat = 1\n"), true],
  ["notes that mention it", bytes("Ran Millrace tonight.\n"), false],
  ["binary that mentions it", bytes("\0written by Millrace"), false],
  ["mention far down", bytes(" ".repeat(3000) + "written by Millrace"), false],
];

for (const [name, content, ours] of cases) {
  Deno.test(`writtenByMillrace() is ${ours} when it gets ${name}`, () => {
    assertEquals(writtenByMillrace(content), ours);
  });
}
