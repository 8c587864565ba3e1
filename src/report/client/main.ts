import './language.js';
import { circularMean } from '../../math/angles.js';
import { mountInstruments } from './instruments.js';
import { createClock, localise } from './locale.js';
import { mountLadders } from './ladder.js';
import { mountMap } from './map.js';
import { mountPicks } from './picks.js';
import { readRace, type Race } from './race.js';
import { mountScrub } from './scrub.js';
import { mountSeries } from './series.js';
import { createStore } from './store.js';
import { mountStrips } from './strip.js';
import { mountTips } from './tips.js';

/** Mean wind of the race, the top of the chart. [deg true] */
function meanWind(race: Race): number {
  const { mean } = circularMean(race.boats.map((b) => circularMean(b.columns.twd).mean));
  return Number.isFinite(mean) ? mean : 0;
}

function start(): void {
  document.documentElement.classList.add('live');
  const race = document.getElementById('series') ? readRace() : null;
  const clock = createClock(race?.zone ?? 'UTC');
  localise(document, clock);
  mountTips();
  if (!race || race.boats.length === 0) return;
  const store = createStore(race.from, race.to, race.racing);
  mountMap(race, store, meanWind(race));
  mountLadders(race, store);
  mountInstruments(race, store);
  mountPicks(race, store, clock);
  mountSeries(race, store, clock);
  mountStrips(race, store);
  mountScrub(race, store, clock);
}

start();
