/** Style sheet of the report page: paper and ink, light and dark, narrow screens, print. */
export const pageStyle = `
:root {
  color-scheme: light dark;
  --page: #f6f5f1; --card: #ffffff; --ink: #1c2430; --quiet: #59636f; --line: #d5d2c9;
  --accent: #b8391a; --focus: #1d6fb8;
}
@media (prefers-color-scheme: dark) {
  :root {
    --page: #14181e; --card: #1c222b; --ink: #e8e6e0; --quiet: #a5adb8; --line: #38414d;
    --accent: #ff8a66; --focus: #7ab8f0;
  }
}
* { box-sizing: border-box; }
html { font: 16px/1.5 'STIX Two Text', 'DejaVu Sans', Georgia, serif; }
body { margin: 0; background: var(--page); color: var(--ink); }
header, main, footer { max-width: 76rem; margin: 0 auto; padding: 1rem 1.25rem; }
h1 { font-size: 1.7rem; font-weight: 400; margin: .4rem 0 0; }
h2 { font-size: 1.2rem; font-weight: 400; margin: 2rem 0 .5rem; border-bottom: 1px solid var(--line); }
header p, footer { color: var(--quiet); margin: .2rem 0; }
.switches { display: flex; flex-wrap: wrap; gap: .4rem 1.6rem; align-items: baseline; }
fieldset { border: 0; padding: 0; margin: 0; display: flex; flex-wrap: wrap; gap: .2rem .9rem; }
#methods { display: flex; flex-wrap: wrap; gap: .2rem .9rem; }
legend { float: left; padding: 0; color: var(--quiet); margin-right: .7rem; }
.views { display: grid; grid-template-columns: 292fr 360fr; gap: .75rem; margin: .75rem 0; }
figure { margin: 0; background: #ffffff; border: 1px solid var(--line); border-radius: 4px; }
.wide { grid-column: 1 / -1; }
.stage { position: relative; touch-action: manipulation; cursor: crosshair; }
.stage svg { display: block; width: 100%; height: auto; }
.over { position: absolute; inset: 0; pointer-events: none; }
.wide .stage { cursor: default; }
#readout { grid-column: 1 / -1; min-height: 3.1em; margin: 0; }
:focus-visible { outline: 3px solid var(--focus); outline-offset: 2px; }
.sliders { display: grid; grid-template-columns: repeat(auto-fit, minmax(15rem, 1fr)); gap: .4rem 1.6rem; }
.exposure-slider { margin: .6rem 0 1rem; }
.slider { display: grid; grid-template-columns: 1fr auto; align-items: baseline; }
.slider input { grid-column: 1 / -1; width: 100%; accent-color: var(--accent); }
output { font-variant-numeric: tabular-nums; }
button {
  font: inherit; color: inherit; background: var(--card); border: 1px solid var(--quiet);
  border-radius: 4px; padding: .2rem .8rem; cursor: pointer;
}
.buttons { display: flex; flex-wrap: wrap; gap: .6rem; margin: .8rem 0; }
table { border-collapse: collapse; width: 100%; }
th, td { text-align: left; vertical-align: top; padding: .3rem 1rem .3rem 0; border-bottom: 1px solid var(--line); }
th { font-weight: 400; color: var(--quiet); }
td.number { font-variant-numeric: tabular-nums; white-space: nowrap; }
td.state { white-space: nowrap; }
.settled::before { content: "\\2713\\00a0"; }
.doubtful { color: var(--accent); }
.doubtful::before { content: "!\\00a0"; }
.open { color: var(--quiet); }
.open::before { content: "\\2013\\00a0"; }
pre {
  background: var(--card); border: 1px solid var(--line); border-radius: 4px; padding: .8rem;
  overflow: auto; font: .85rem/1.45 'DejaVu Sans Mono', ui-monospace, monospace;
}
.scroll { overflow-x: auto; }
i { font-style: italic; }
sup, sub { font-size: .75em; line-height: 0; }
@media (max-width: 46rem) {
  .views { grid-template-columns: minmax(0, 1fr); }
  .wide .stage { overflow-x: auto; }
  .wide svg { min-width: 34rem; }
  html { font-size: 15px; }
  th, td { padding-right: .6rem; }
}
@media print {
  :root {
    --page: #ffffff; --card: #ffffff; --ink: #000000; --quiet: #444444; --line: #bbbbbb;
    --accent: #8f2a10;
  }
  .switches, .sliders, .buttons, .exposure-slider { display: none; }
  figure, tr, pre { break-inside: avoid; }
  pre { white-space: pre-wrap; }
}
@media (prefers-reduced-motion: no-preference) { button { transition: background .15s; } }
`;
