import { CAUTION, type VerificationCase, type VerificationCheck, type VerificationReport } from '@halfdeep/contracts';
import { shown } from './numbers';
import { plateSvg } from './plate-svg';

/** Text as HTML. */
export function escapeHtml(text: string): string {
  return text.replace(/[&<>"']/g, (sign) => `&#${sign.charCodeAt(0)};`);
}

/** The verification report as one page that needs nothing else. */
export function reportHtml(report: VerificationReport): string {
  const { counts, coreVersion } = report;
  const verdict =
    counts.failed === 0 && report.failures.length === 0
      ? `All ${counts.cases} cases pass, by ${counts.checks} checks.`
      : `${counts.failed} of ${counts.cases} cases fail, by ${counts.checksFailed} of ${counts.checks} checks.`;
  return `<!doctype html>
<html lang="en-GB">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Verification of the ocean core, version ${escapeHtml(coreVersion)}</title>
<style>${STYLE}</style>
</head>
<body>
<a class="skip" href="#cases">To the cases</a>
<header>
<h1>Verification of the ocean core</h1>
<p class="statement">${verdict}</p>
<p>Core version ${escapeHtml(coreVersion)}. Every obtained number and every plate on this page was computed by the run of the tests that wrote it.
Expected values come from closed forms, quadrature or spectral solutions that share no code with the core, or from an independent code where the
source says so. Published sources are named from memory and their results were derived anew; they have not been held against the printed page.</p>
</header>
<main>
<section aria-labelledby="sum">
<h2 id="sum">Cases</h2>
<div class="scroll" role="region" aria-labelledby="sum" tabindex="0"><table>
<thead><tr><th scope="col">Case</th><th scope="col">Title</th><th scope="col">Leading quantity</th><th scope="col" class="n">Expected</th><th scope="col" class="n">Obtained</th><th scope="col" class="n">Error</th><th scope="col" class="n">Tolerance</th><th scope="col" class="n">Order</th><th scope="col">Verdict</th></tr></thead>
<tbody>
${report.cases.map(summaryRow).join('\n')}
</tbody></table></div>
</section>
${failures(report)}
<div id="cases">
${report.cases.map(caseSection).join('\n')}
</div>
</main>
<footer><p>${escapeHtml(CAUTION)}</p></footer>
</body>
</html>
`;
}

function anchor(id: string): string {
  return `case-${id.replace("'", '-prime')}`;
}

function summaryRow(entry: VerificationCase): string {
  const n = (value: number | null, digits = 6) =>
    `<td class="n">${value === null ? '–' : escapeHtml(shown(value, digits))}</td>`;
  return `<tr><th scope="row"><a href="#${anchor(entry.id)}">${escapeHtml(entry.id)}</a></th><td>${escapeHtml(entry.title)}</td><td>${escapeHtml(entry.quantity)}</td>${n(entry.expected)}${n(entry.obtained)}${n(entry.error, 2)}${n(entry.tolerance, 2)}${n(entry.order, 3)}<td>${verdictOf(entry.passed)}</td></tr>`;
}

function caseSection(entry: VerificationCase): string {
  const id = anchor(entry.id);
  const plates = entry.checks.flatMap((check) =>
    check.plate
      ? [`<figure>${plateSvg(check.plate)}<figcaption>${escapeHtml(check.plate.caption)}</figcaption></figure>`]
      : [],
  );
  return `<section class="case" id="${id}" aria-labelledby="${id}-head">
<div class="margin"><h2 id="${id}-head">${escapeHtml(entry.id)} · ${escapeHtml(entry.title)}</h2><p>${verdictOf(entry.passed)}</p><p class="note">${escapeHtml(entry.source)}</p></div>
<div class="field"><p>${escapeHtml(entry.about)}</p>
<div class="scroll" role="region" aria-label="Checks of case ${escapeHtml(entry.id)}" tabindex="0"><table>
<thead><tr><th scope="col">Quantity</th><th scope="col">Resolution</th><th scope="col" class="n">Expected</th><th scope="col" class="n">Obtained</th><th scope="col" class="n">Error</th><th scope="col" class="n">Tolerance</th><th scope="col" class="n">Order</th><th scope="col">Verdict</th></tr></thead>
<tbody>
${entry.checks.map(checkRow).join('\n')}
</tbody></table></div>
${plates.length > 0 ? `<div class="plates">${plates.join('\n')}</div>` : ''}
</div></section>`;
}

const KIND: Record<VerificationCheck['errorKind'], string> = {
  relative: 'relative',
  absolute: '',
  L2: 'L2',
  bound: 'beyond the bound',
};

function checkRow(check: VerificationCheck): string {
  const kind = KIND[check.errorKind];
  const order =
    check.order === null || check.orderRange === null
      ? '–'
      : `${shown(check.order, 3)} <small>(${check.orderRange.map((bound) => shown(bound, 3)).join(' to ')})</small>`;
  return `<tr><th scope="row">${escapeHtml(check.quantity)}</th><td>${escapeHtml(check.resolution)}</td><td class="n">${shown(check.expected)}</td><td class="n">${shown(check.obtained)}</td><td class="n">${shown(check.error, 2)}${kind ? ` <small>${kind}</small>` : ''}</td><td class="n">${shown(check.tolerance, 2)}</td><td class="n">${order}</td><td>${verdictOf(check.passed)}</td></tr>`;
}

function failures(report: VerificationReport): string {
  if (report.failures.length === 0) return '';
  const items = report.failures.map((failure) => `<li>${escapeHtml(failure)}</li>`).join('');
  return `<section aria-labelledby="failures"><h2 id="failures">Tests that failed</h2><ul>${items}</ul></section>`;
}

/** Shape and word go together: tick and pass, barred square and fail. */
function verdictOf(passed: boolean): string {
  return passed
    ? '<span class="pass"><svg class="sign" viewBox="0 0 12 12" aria-hidden="true"><path d="M1.5 6.5 4.5 9.5 10.5 2.5"/></svg>pass</span>'
    : '<span class="fail"><svg class="sign" viewBox="0 0 12 12" aria-hidden="true"><path class="solid" d="M1 1H11V11H1Z"/><path class="bar" d="M3 6H9"/></svg>fail</span>';
}

const STYLE = `
:root { color-scheme: light dark;
  --ground: light-dark(#f1f1ed, #0d131d); --sheet: light-dark(#fbfbf9, #141b26); --text: light-dark(#111e32, #e9e8df);
  --text-2: light-dark(#3f4d5f, #b4b8ab); --outline: light-dark(#6e7a88, #697886); --hair: light-dark(#cdcfc8, #353f4d);
  --refuse: light-dark(#941617, #f6706a); --success: light-dark(#14664a, #73cba1); --focus: light-dark(#224dcf, #69caff);
  --s1: light-dark(#111e32, #e9e8df); --s2: light-dark(#1868a0, #64b7e5); --s3: light-dark(#a65917, #e6a761);
  --s4: light-dark(#247a5b, #67b896); --s5: light-dark(#694b96, #b49ce1); }
@media print { :root { color-scheme: light; } }
* { box-sizing: border-box; }
body { margin: 0; background: var(--ground); color: var(--text); font: 400 14px/20px "Inter Variable", Inter, system-ui, sans-serif; font-feature-settings: "tnum" 1; }
header, main, footer { max-width: 1680px; margin: 0 auto; padding: 24px 32px 0; }
footer { padding-bottom: 32px; border-top: 1px solid var(--hair); margin-top: 24px; color: var(--text-2); max-width: 1616px; }
header p { max-width: 90ch; }
h1 { font-size: 26px; line-height: 32px; font-weight: 600; margin: 0; }
h2 { font-size: 15px; line-height: 20px; font-weight: 600; margin: 0 0 8px; }
.statement { font-size: 22px; line-height: 30px; margin: 8px 0; }
section { border-top: 1px solid var(--hair); padding: 24px 0; }
.case { display: grid; grid-template-columns: 176px minmax(0, 1fr); gap: 24px; }
.margin p { margin: 0 0 8px; }
.note { font-size: 11.5px; line-height: 16px; color: var(--text-2); }
.field > p { margin: 0 0 12px; max-width: 90ch; }
.scroll { overflow-x: auto; }
.scroll:focus-visible, a:focus-visible { outline: 2px solid var(--focus); outline-offset: 2px; }
a { color: inherit; display: inline-block; min-width: 24px; min-height: 24px; }
.skip { position: absolute; left: -999px; } .skip:focus { left: 32px; top: 4px; background: var(--sheet); padding: 4px 8px; }
table { border-collapse: collapse; background: var(--sheet); width: 100%; font-size: 12.5px; line-height: 16px; }
th, td { text-align: left; font-weight: 400; padding: 6px 12px 6px 8px; border-bottom: 1px solid var(--hair); vertical-align: top; }
thead th { color: var(--text-2); border-bottom: 1px solid var(--outline); white-space: nowrap; }
tbody th { min-width: 16ch; }
.n { text-align: right; white-space: nowrap; } small { font-size: 11.5px; color: var(--text-2); }
.pass, .fail { white-space: nowrap; font-weight: 500; } .pass { color: var(--success); } .fail { color: var(--refuse); }
.sign { width: 12px; height: 12px; margin-right: 4px; vertical-align: -1px; fill: none; stroke: currentColor; stroke-width: 1.8; }
.sign .solid { fill: currentColor; } .sign .bar { stroke: var(--sheet); }
.plates { display: grid; grid-template-columns: repeat(auto-fill, minmax(min(100%, 340px), 1fr)); gap: 24px; margin-top: 16px; }
figure { margin: 0; background: var(--sheet); padding: 12px; }
figure svg { width: 100%; height: auto; display: block; } figcaption { font-size: 12.5px; line-height: 16px; color: var(--text-2); margin-top: 8px; }
figure text { font-size: 11px; fill: var(--text-2); } figure .name { fill: var(--text); font-style: italic; }
.hair { fill: none; stroke: var(--outline); stroke-width: .6; } .ink { fill: var(--text); }
polyline { fill: none; stroke-width: 1.5; } circle { fill: var(--sheet); stroke-width: 1.5; }
${[1, 2, 3, 4, 5].map((k) => `polyline.s${k}, circle.s${k} { stroke: var(--s${k}); } text.end.s${k} { fill: var(--s${k}); }`).join(' ')}
@media (max-width: 760px) { header, main, footer { padding-left: 16px; padding-right: 16px; } .case { grid-template-columns: minmax(0, 1fr); gap: 8px; } }
@media print { .case, figure, tr { break-inside: avoid; } body { background: none; } }
`;
