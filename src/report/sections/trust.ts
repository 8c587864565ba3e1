import type { BoatResult, InputEntry, Result } from '../../result/result.js';
import { REFERENCE_WORDS } from '../causes.js';
import { quantity, secondsOf, time } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { BASIS_WORDS } from '../notes.js';
import { TERMS } from '../terms.js';
import { section, table } from './figure.js';
import { SOURCE_WORDS } from './masthead.js';

/** What the page rests on and what it must not be used for. */
export function trust(result: Result): Safe {
  return section(
    'trust',
    'Method and trust',
    html`${safety()}${warnings(result)}${method(result)}${corrections(result)}${inputs(result.inputs)}${provenance(result)}`,
    'appendix',
  );
}

function safety(): Safe {
  return html`<div class="safety">
    <h3>For looking back, ashore</h3>
    <p>
      This page is not for navigation, for avoiding collisions or for deciding whether to sail. Positions and wind on it
      may be wrong. Local rules, race officials and qualified people come first. Remarks on sheeting and trim are hints
      to test, not instructions.
    </p>
  </div>`;
}

function warnings(result: Result): Part {
  if (result.warnings.length === 0)
    return html`<h3>Warnings</h3>
      <p>None.</p>`;
  return html`<h3>Warnings</h3>
    <ul class="warnings">
      ${result.warnings.map((w) => html`<li><code>${w.code}</code> ${w.message}${w.file && html` <span class="soft">(${nameOf(w.file)})</span>`}</li>`)}
    </ul>`;
}

function method(result: Result): Safe {
  const sources = result.wind.sources.map((s) => SOURCE_WORDS[s]).join(' and ') || 'nothing';
  return html`<h3>How the figures came about</h3>
    <p>
      Tracks are smoothed and brought to one row a second. The wind at each boat is taken from ${sources}; a boat’s own
      course never enters the wind against which her own angle is judged, other than through slow corrections that are
      opposite on the two tacks. Settled sailing is averaged in stretches of half a minute, for the gain to windward is
      curved in the angle and the noise of single seconds would pass for a loss. The metres in the ledger add up to what
      was lost, by construction.
    </p>
    <dl class="basis">
      ${(Object.entries(BASIS_WORDS) as [keyof typeof BASIS_WORDS, string][]).map(
        ([basis, words]) =>
          html`<dt><span class="b-${basis}">${basis}</span></dt>
            <dd>${BASIS_MEANING[basis]} <span class="vh">${words}</span></dd>`,
      )}
    </dl>
    <p>
      Each figure’s error opens when you touch it, point at it or move the focus to it. The error is that of the figure
      as sailed in that stretch; what a wrong calibration would shift is stated apart.
    </p>`;
}

const BASIS_MEANING: Readonly<Record<keyof typeof BASIS_WORDS, string>> = {
  measured: 'An instrument said so.',
  derived: 'Worked out by geometry from measurements; no boat model took part.',
  inferred: 'Went through the boat model and is as good as that model. Set in italics.',
  assumed: 'Taken as given. Set in italics with a dotted line.',
};

function corrections(result: Result): Safe {
  const { twd_offset_deg, current } = result.corrections;
  const rows: Part[][] = [
    ['Station wind direction, to be added', quantity(twd_offset_deg, 'deg', { sign: true })],
    ['Current sets toward', quantity(current?.set_deg ?? null, 'deg', { digits: 0 })],
    ['Current drift', quantity(current?.drift_kn ?? null, 'kn')],
    ...result.boats.flatMap((b): Part[][] => [
      [
        html`${nameOf(b.name)}: compass, to be added`,
        quantity(b.corrections.compass_offset_deg, 'deg', { sign: true }),
      ],
      [
        html`${nameOf(b.name)}: apparent wind angle, to be added`,
        quantity(b.corrections.awa_offset_deg, 'deg', { sign: true }),
      ],
    ]),
  ];
  return html`<h3>Corrections found</h3>
    <p>A dash: the recording could not tell, so nothing was applied.</p>
    ${table('Corrections', ['Correction', 'Value'], rows)}`;
}

function reasons(input: InputEntry): Part {
  const ignored = Object.entries(input.ignored_types).map(
    ([type, n]) => html`<li>${n} of ${type}: valid, not used</li>`,
  );
  const rejected = input.rejected.map((r) => html`<li>${r.count}: ${r.reason}, first at line ${r.first_line}</li>`);
  const gaps = input.gaps
    .slice(0, 6)
    .map((g) => html`<li>gap of ${Math.round(g.seconds)} s at ${time(secondsOf(g.from), 'hms')}</li>`);
  const more = input.gaps.length > 6 && html`<li>and ${input.gaps.length - 6} more gaps</li>`;
  const all = [...ignored, ...rejected, ...gaps];
  return all.length > 0
    ? html`<ul>
        ${all}${more}
      </ul>`
    : 'nothing';
}

function inputs(entries: readonly InputEntry[]): Safe {
  const rows: Part[][] = entries.map((i) => [
    html`${nameOf(i.file)} <span class="soft">${i.kind}</span>`, i.rows, i.kept, i.ignored, i.rejected.reduce((s, r) => s + r.count, 0), i.fixes, i.samples, reasons(i),
  ]); // prettier-ignore
  return html`<h3>What was read</h3>
    ${table('Rows read are kept, ignored or rejected', ['File', 'Rows', 'Kept', 'Ignored', 'Rejected', 'Fixes', 'Wind', 'Reasons and gaps'], rows)}`;
}

function provenance(result: Result): Safe {
  const reference = (boat: BoatResult): string => {
    const ledger = boat.legs.find((l) => l.ledger)?.ledger;
    return ledger ? REFERENCE_WORDS[ledger.reference] : 'none';
  };
  const rows: Part[][] = result.boats.map((b) => [
    nameOf(b.name),
    b.model.boat,
    b.model.tuned ? 'tuned' : 'not tuned',
    reference(b),
    digest(b.model.sha256),
  ]);
  const files: Part[][] = result.inputs.map((i) => [nameOf(i.file), digest(i.sha256)]);
  return html`<h3>Made with</h3>
    <p>
      ${result.program.name} ${result.program.version}, result format ${result.version}. The same files give the same
      page.
    </p>
    ${table('Boat models', ['Boat', 'Model', '', 'Ledger against', 'SHA-256 of the boat file'], rows)}${table('Digests', ['File', 'SHA-256'], files)}`;
}

function digest(sha: string): Safe {
  return html`<code class="digest">${sha}</code>`;
}

/** All terms in one place, for paper and for reading through. */
export function glossary(): Safe {
  return section(
    'words',
    'Words',
    html`<dl class="glossary">
      ${Object.values(TERMS).map(
        (t) =>
          html`<dt>${t.word}</dt>
            <dd>${t.meaning}</dd>`,
      )}
    </dl>`,
    'appendix',
  );
}
