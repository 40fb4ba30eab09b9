#pragma once

#include <string_view>

namespace pellicle::detail {

/// The style sheet of reports. No web fonts, no scripts; grey print and screen say the same.
inline constexpr std::string_view kReportStyle = R"css(
:root { color-scheme: light; --ink: #17222b; --soft: #55636d; --rule: #cfd8dd; --wash: #f1f4f6; --deep: #0b4f79; }
* { box-sizing: border-box; }
html { -webkit-text-size-adjust: 100%; }
body { margin: 0; background: #fff; color: var(--ink);
  font: 16px/1.5 "Source Sans 3", "Segoe UI", "Helvetica Neue", Arial, "DejaVu Sans", sans-serif; }
main, header, footer { max-width: 58rem; margin: 0 auto; padding: 0 1.5rem; }
header { padding-top: 2.2rem; }
/* A thin film on a thick substrate. */
header::before { content: ""; display: block; height: 13px; margin-bottom: 1.4rem;
  background: linear-gradient(#8fa7b3 0 3px, #fff 3px 5px, #17222b 5px);
  -webkit-print-color-adjust: exact; print-color-adjust: exact; }
.kind { margin: 0; color: var(--soft); letter-spacing: .02em; }
h1 { margin: .1rem 0 1.2rem; font-size: 1.9rem; line-height: 1.2; overflow-wrap: anywhere; }
h2 { margin: 2.4rem 0 .8rem; padding-bottom: .25rem; border-bottom: 1px solid var(--ink); font-size: 1.25rem; }
h2 .count { display: inline-block; min-width: 1.9rem; color: var(--soft); font-weight: normal; }
h3 { margin: 1.6rem 0 .6rem; font-size: 1.05rem; overflow-wrap: anywhere; }
p, ul { margin: .6rem 0; max-width: 46rem; }
ul { padding-left: 1.2rem; }
li { margin: .25rem 0; overflow-wrap: anywhere; }
.brief { border: 1.5px solid var(--ink); padding: 1rem 1.3rem; }
.brief p { margin: .35rem 0; max-width: none; overflow-wrap: anywhere; }
.brief .film { color: var(--soft); margin-top: .9rem; }
.brief .film:first-child { margin-top: 0; }
.brief .answer { font-size: 1.7rem; line-height: 1.25; font-weight: 600; margin: 0; }
.brief .tally { border-top: 1px solid var(--rule); padding-top: .7rem; margin-top: .9rem; }
.alarm { font-weight: 600; }
.alarm::before { content: "■ "; }
.remark { color: var(--soft); }
.absent { color: var(--soft); font-style: italic; }
a { color: var(--deep); }
dl { margin: .6rem 0; }
dl > div { display: grid; grid-template-columns: 15rem 1fr; gap: 0 1.2rem; padding: .28rem 0; border-bottom: 1px solid var(--rule); }
dt { color: var(--soft); }
dd { margin: 0; overflow-wrap: anywhere; }
.wide { overflow-x: auto; margin: 1rem 0; }
table { border-collapse: collapse; width: 100%; font-size: .9rem; font-variant-numeric: tabular-nums lining-nums; }
caption { text-align: left; font-weight: 600; padding-bottom: .35rem; }
th, td { text-align: left; vertical-align: top; padding: .32rem .8rem .32rem 0; border-bottom: 1px solid var(--rule); }
thead th { border-bottom: 1.5px solid var(--ink); vertical-align: bottom; font-weight: 600; }
tbody th { font-weight: normal; }
.n { text-align: right; white-space: nowrap; }
.w { white-space: nowrap; }
th.n { white-space: normal; }
sub { font-size: .75em; line-height: 0; }
figure { margin: 1.2rem 0; }
figure svg { display: block; max-width: 100%; height: auto; }
figcaption { color: var(--soft); font-size: .92rem; margin-top: .4rem; max-width: 46rem; }
code, pre { font: .88rem/1.5 ui-monospace, "Cascadia Mono", Menlo, Consolas, "DejaVu Sans Mono", monospace; }
pre { background: var(--wash); padding: .8rem 1rem; white-space: pre-wrap; overflow-wrap: anywhere; margin: .6rem 0; }
.signature { display: grid; grid-template-columns: 1fr 1fr 1fr; gap: 0 1.5rem; margin-top: 3.2rem; }
.signature div { border-top: 1px solid var(--ink); padding-top: .3rem; color: var(--soft); }
footer { color: var(--soft); padding-top: 1.4rem; padding-bottom: 2.5rem; font-size: .92rem; }
@media (max-width: 40rem) { dl > div { grid-template-columns: 1fr; } }
@page { size: A4; margin: 17mm 16mm; @bottom-right { content: counter(page) " / " counter(pages); font: 8pt sans-serif; } }
@media print {
  html { font-size: 9.5pt; }
  body { font-size: 1rem; }
  main, header, footer { max-width: none; padding-left: 0; padding-right: 0; }
  header { padding-top: 0; }
  h1 { font-size: 18pt; }
  h2 { margin-top: 1.5rem; }
  .signature { break-inside: avoid; }
  h2, h3, caption { break-after: avoid; }
  tr, figure, .brief, .short, dl > div, li { break-inside: avoid; }
  thead { display: table-header-group; }
  .wide { overflow: visible; }
  table { font-size: 8.5pt; }
  th, td { padding-top: .18rem; padding-bottom: .18rem; }
  footer { padding: .6rem 0 0; font-size: 8pt; }
  a { color: inherit; text-decoration: none; }
}
)css";

}  // namespace pellicle::detail
