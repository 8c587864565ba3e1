import type { BoatResult } from '../../result/result.js';
import { CAUSE_MEANING, CAUSE_WORDS } from '../causes.js';
import { total } from '../figures.js';
import { ANGLE_AND_SPEED, TOGETHER_MEANING, TOGETHER_WORDS } from '../findings.js';
import { inline, quantity } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { ledgerGaps, type LedgerGap } from '../ledger-gaps.js';
import { table } from './figure.js';

type Names = readonly [string, string];

/** One boat's ledger less the other's, shifts under a line of their own. */
export function ledgerGapTable(first: BoatResult, second: BoatResult): Part {
  const gaps = ledgerGaps(first, second);
  if (!gaps) return null;
  const names: Names = [first.name, second.name];
  const several = gaps.laps.length > 1;
  const cells = ({ laps, together }: Pick<LedgerGap, 'laps' | 'together'>): Part[] =>
    [...laps, ...(several ? [together] : [])].map((q) => quantity(q, 'm', { sign: true }));
  const row = (gap: LedgerGap): Part[] => [
    html`<span title="${CAUSE_MEANING[gap.cause]}">${CAUSE_WORDS[gap.cause]}</span>`,
    ...cells(gap),
  ];
  return html`<div class="gaps">
    ${table(
      html`Where ${nameOf(names[0])} lost more than ${nameOf(names[1])}, metres (below zero: less)`,
      ['', ...gaps.laps.map((lap) => `Lap ${lap}`), ...(several ? ['Together'] : [])],
      [
        ...withTogether(gaps.causes, row, cells),
        [html`<b>Before shifts</b>`, ...cells(gaps.before)],
        ...(gaps.shifts ? [row(gaps.shifts)] : []),
      ],
      'plain gap-table',
    )}
    ${saidOf(gaps.causes, names)}
  </div>`;
}

/** The causes, and after the last of angle and speed their sum. */
function withTogether(
  causes: readonly LedgerGap[],
  row: (gap: LedgerGap) => Part[],
  cells: (gap: Pick<LedgerGap, 'laps' | 'together'>) => Part[],
): Part[][] {
  const rows = causes.map(row);
  const trade = causes.filter(({ cause }) => ANGLE_AND_SPEED.has(cause));
  if (trade.length < 2) return rows;
  const laps = trade[0].laps.map((_, k) => total(trade.map((gap) => gap.laps[k]).filter((q) => q !== null)));
  const sum = { laps, together: total(trade.map(({ together }) => together).filter((q) => q !== null)) };
  rows.splice(causes.indexOf(trade[trade.length - 1]) + 1, 0, [
    html`<i title="${TOGETHER_MEANING}">${TOGETHER_WORDS}</i>`,
    ...cells(sum),
  ]);
  return rows;
}

/** What is more than chance, largest first. */
function saidOf(causes: readonly LedgerGap[], [first, second]: Names): Safe {
  const told = causes
    .flatMap(({ together, stands, cause }) => (together && stands ? [{ together, cause }] : []))
    .sort((a, b) => Math.abs(b.together.value) - Math.abs(a.together.value));
  if (told.length === 0) return html`<p>No cause stands out beyond its error, all of them looked at together.</p>`;
  const parts = told.map(({ together, cause }, k) => {
    const name = together.value > 0 ? first : second;
    const size = { ...together, value: Math.abs(together.value) };
    return html`${k > 0 && '; '}${nameOf(name)} lost ${inline(size, 'm')} more (${CAUSE_WORDS[cause].toLowerCase()})`;
  });
  const angled = told.some(({ cause }) => cause === 'high' || cause === 'low');
  return html`<p>Beyond the errors, all causes looked at together: ${parts}.</p>
    ${
      angled &&
      html`<p class="small">
        Sailing high or low and speed for the angle belong together: where the reference judges the speed at that angle
        wrongly, one is too large by what the other is too small.
      </p>`
    }`;
}
