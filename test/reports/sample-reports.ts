import { debrief } from '../../src/debrief.js';
import { demoFiles } from '../../src/demo/index.js';
import { readRaces } from '../../src/files/race.js';
import { resolveRace } from '../../src/files/race-resolve.js';
import { debriefPage } from '../../src/report/page.js';
import { jsonText } from '../../src/result/json.js';

/** The demo race's result file and page, with a fixed version: what reports/sample holds. */
export async function sampleReports(): Promise<{ json: string; page: string }> {
  const files = demoFiles();
  const [draft] = await readRaces(files.get('race.yaml')!, 'race.yaml');
  const { race } = resolveRace(draft, { firstTime: null, innerNames: new Map() });
  const open = (name: string) => ({ name, chunks: [new TextEncoder().encode(files.get(name))] });
  const { result, series } = await debrief(race, open, { version: 'sample' });
  return { json: jsonText(result), page: debriefPage(result, series) };
}
