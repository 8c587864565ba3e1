import { toKnots } from '../math/units.js';
import { document } from './document.js';
import { number, plural } from './format.js';
import { html, type Part, type Safe } from './html.js';
import { table } from './sections/figure.js';

/** What the page of a tuning draws from. */
export interface TuneData {
  readonly boat: string;
  readonly tunedBoat: string;
  readonly races: readonly string[];
  readonly fit: {
    readonly factors: readonly {
      readonly name: string;
      readonly value: number;
      readonly se: number;
      readonly priorSd: number;
      readonly moved: boolean;
      readonly reason: string;
    }[];
    readonly correlation: readonly (readonly number[])[];
    /** Measured less modelled speed. [m/s] */
    readonly before: { readonly rms: number; readonly mean: number };
    readonly after: { readonly rms: number; readonly mean: number };
    readonly blocks: number;
    readonly spells: number;
  };
}

const WORDS: Readonly<Record<string, string>> = {
  hullResistance: 'Resistance of the hull',
  rigDrag: 'Drag of the rig',
  rightingMoment: 'Righting moment',
  foilSlope: 'Grip of the foils',
};

const wordsOf = (name: string): string => WORDS[name] ?? name;

/**
 * What the logs say of the boat model, and what they do not.
 *
 * @returns One self-contained HTML document; the same input gives the same bytes.
 */
export function tunePage(tuned: TuneData): string {
  const { fit } = tuned;
  const body = html`<header class="masthead">
      <p class="kicker">Tuning</p>
      <h1>${tuned.boat}</h1>
      <p class="day">
        ${plural(fit.blocks, 'settled block')} in ${plural(fit.spells, 'spell')}: ${tuned.races.join(', ')}.
      </p>
    </header>
    <main class="season">
      <section aria-labelledby="h-factors">
        <h2 id="h-factors">What was moved</h2>
        <p class="first">
          Each factor multiplies what the boat file says; 1 is as it was. A factor the logs do not determine stays.
        </p>
        ${factors(tuned)}
      </section>
      <section aria-labelledby="h-fit">
        <h2 id="h-fit">How well it fits</h2>
        ${residuals(tuned)}
        <p>
          An error in the wind’s speed goes into these factors unseen: 2 % of wind is about 4 % of hull resistance. The
          tuned boat is not for judging the races it was tuned on.
        </p>
      </section>
      ${correlations(tuned)}
    </main>`;
  return document({ title: `Tuning: ${tuned.boat}`, body, data: {} });
}

function factors({ fit }: TuneData): Safe {
  const rows = fit.factors.map(({ name, value, se, priorSd, moved, reason }): Part[] => [
    wordsOf(name),
    moved ? html`${number(value, 3)} ± ${number(se, 3)}` : number(value, 3),
    number(priorSd, 2),
    moved ? 'moved' : `left: ${reason}`,
  ]);
  return table('Factors of the boat model', ['', 'Factor', 'Expected within', ''], rows);
}

function residuals({ fit }: TuneData): Safe {
  const row = (name: string, { rms, mean }: { rms: number; mean: number }): Part[] => [
    name,
    html`${number(toKnots(mean), 3, true)} kn`,
    html`${number(toKnots(rms), 3)} kn`,
  ];
  const rows = [row('Before', fit.before), row('After', fit.after)];
  return table('Measured less modelled speed', ['', 'Mean', 'Root mean square'], rows);
}

/** Errors that hang together: a factor is told from another only as far as this is small. */
function correlations({ fit }: TuneData): Safe | null {
  const moved = fit.factors.filter((factor) => factor.moved).map(({ name }) => wordsOf(name));
  if (moved.length < 2) return null;
  const rows = moved.map((name, i): Part[] => [name, ...moved.map((_, k) => number(fit.correlation[i][k], 2, true))]);
  return html`<section aria-labelledby="h-corr">
    <h2 id="h-corr">What hangs together</h2>
    ${table('Correlation of the errors', ['', ...moved], rows)}
  </section>`;
}
