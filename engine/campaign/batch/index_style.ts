/** Style sheet of the page of a batch: that of the report page, for many small cards. */
export const indexStyle = `
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
header, main, footer { max-width: 84rem; margin: 0 auto; padding: 1rem 1.25rem; }
h1 { font-size: 1.7rem; font-weight: 400; margin: .4rem 0 0; }
h2 { font-size: 1.2rem; font-weight: 400; margin: 2rem 0 .7rem; border-bottom: 1px solid var(--line); }
h3 { font-size: 1rem; font-weight: 400; margin: .5rem 0 .1rem; overflow-wrap: anywhere; }
header p, footer { color: var(--quiet); margin: .2rem 0; }
a { color: inherit; text-decoration-color: var(--quiet); text-underline-offset: .2em; }
a:hover { text-decoration-color: var(--accent); }
:focus-visible { outline: 3px solid var(--focus); outline-offset: 2px; }
.cards { display: grid; grid-template-columns: repeat(auto-fill, minmax(13.5rem, 1fr)); gap: .9rem; }
.card {
  background: var(--card); border: 1px solid var(--line); border-radius: 4px; padding: .6rem .7rem;
}
.pictures { display: grid; grid-template-columns: repeat(auto-fit, minmax(5.5rem, 1fr)); gap: .4rem; }
.pictures a { display: block; text-decoration: none; }
.pictures img { display: block; width: 100%; height: auto; background: #ffffff; border-radius: 3px; }
.pictures span { display: block; color: var(--quiet); font-size: .8rem; text-align: center; }
.none {
  aspect-ratio: 1; display: grid; place-items: center; color: var(--quiet);
  border: 1px dashed var(--line); border-radius: 3px; font-size: .85rem;
}
.card p { margin: .1rem 0; font-size: .88rem; line-height: 1.4; }
.quiet { color: var(--quiet); }
.failed, .missing { color: var(--accent); }
.failed::before, .missing::before { content: "!\\00a0"; }
.plates { display: grid; grid-template-columns: repeat(auto-fit, minmax(20rem, 1fr)); gap: .9rem; }
figure { margin: 0; background: #ffffff; border: 1px solid var(--line); border-radius: 4px; }
figure img { display: block; width: 100%; height: auto; }
figcaption { color: #59636f; font-size: .85rem; padding: .2rem .7rem .4rem; }
table { border-collapse: collapse; width: 100%; }
th, td { text-align: left; vertical-align: top; padding: .3rem 1rem .3rem 0; border-bottom: 1px solid var(--line); }
th { font-weight: 400; color: var(--quiet); }
.scroll { overflow-x: auto; }
i { font-style: italic; }
sup, sub { font-size: .75em; line-height: 0; }
@media print { :root { --page: #ffffff; --card: #ffffff; --ink: #000000; } .card { break-inside: avoid; } }
`;
