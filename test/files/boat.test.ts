import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { boatText, readBoat, type BoatContent } from '../../src/files/boat.js';
import { boatFileSchema } from '../../src/files/boat-schema.js';
import type { BoatSpec } from '../../src/physics/boat-spec.js';
import { BUILT_IN_BOATS } from '../../src/physics/built-in.js';
import { KNOT } from '../../src/math/units.js';

/** The two types are declared apart so that neither folder leans on the other; here they are held together. */
const asSpec = (boat: BoatContent): BoatSpec => boat;
const known: readonly BoatContent[] = BUILT_IN_BOATS;

const MINIMAL = `
boat: Plover
hull: { waterline_m: 4.0, mass_kg: 90, wetted_m2: 2.9 }
foils:
  board: { area_m2: 0.3, span_m: 0.9 }
  rudder: { area_m2: 0.12, span_m: 0.6 }
rig: { area_m2: 8, head_m: 6, centre_m: 2.5, windage_m2: 0.9 }
crew: { mass_kg: 80, lever_m: 1.1 }
stability: { metacentric_height_m: 0.6, heel_limit_deg: 5 }
`;

const failure = async (text: string): Promise<string> => {
  const error: unknown = await readBoat(text, 'plover.yaml', known).then(
    () => null,
    (thrown: unknown) => thrown,
  );
  expect(error, 'a message').toMatchObject({ name: 'UserError', exitCode: 2 });
  return (error as Error).message;
};

describe('boat file', () => {
  it('is read with defaults for what is not said', async () => {
    const boat = asSpec(await readBoat(MINIMAL, 'plover.yaml'));
    expect(boat.name).toBe('Plover');
    expect(boat.hull.waterline).toBe(4);
    expect(boat.rig.jibArea).toBe(0);
    expect(boat.tuning).toEqual({ hullResistance: 1, rigDrag: 1, rightingMoment: 1, foilSlope: 1 });
  });

  it('reads back every built-in boat as it was written', async () => {
    for (const boat of known) {
      expect(await readBoat(await boatText(boat, ['a comment']), 'x.yaml')).toEqual(boat);
      expect(await readBoat(JSON.stringify({ boat: 'Plover', like: boat.name }), 'x.json', known)).toEqual({
        ...boat,
        name: 'Plover',
      });
    }
  });

  it('takes a table of knots and newtons', async () => {
    const text = MINIMAL.replace('wetted_m2: 2.9', 'wetted_m2: 2.9, resistance: [[2, 9], [4, 45], [5, 90]]');
    const boat = asSpec(await readBoat(text, 'plover.yaml'));
    expect(boat.hull.table?.speed.map((v) => v / KNOT)).toEqual([2, 4, 5]);
    expect(await readBoat(await boatText(boat as BoatContent), 'x.yaml')).toEqual(boat);
  });

  it('lets a file differ from a built-in boat in one number', async () => {
    const text = 'boat: Plover\nlike: single-hander\ncrew: { mass_kg: 64 }\n';
    const boat = await readBoat(text, 'plover.yaml', known);
    expect(boat).toEqual({ ...known[0], name: 'Plover', crew: { ...known[0].crew, mass: 64 } });
  });

  it('names line, field and what is wrong', async () => {
    expect(await failure(MINIMAL.replace('head_m', 'haed_m'))).toMatch(/plover.yaml:7: unknown key `haed_m`.*`head_m`/);
    expect(await failure(MINIMAL.replace('mass_kg: 90', 'mass_kg: -1'))).toMatch(/plover.yaml:3: `hull.mass_kg`/);
    expect(await failure(MINIMAL.replace('centre_m: 2.5', 'centre_m: 7'))).toMatch(/plover.yaml:7: `rig.centre_m`/);
    expect(await failure(MINIMAL.replace(/crew:.*\n/, ''))).toMatch(/`crew` is missing/);
    expect(await failure('boat: Plover\nlike: single-handed\n')).toMatch(/plover.yaml:2: no built-in boat/);
    expect(await failure('- a\n- b\n')).toMatch(/not a boat file/);
    const falling = MINIMAL.replace('wetted_m2: 2.9', 'wetted_m2: 2.9, resistance: [[2, 9], [4, 45], [5, 40]]');
    expect(await failure(falling)).toMatch(/`hull.resistance` must rise/);
  });

  it('has a JSON Schema', () => {
    const schema = z.toJSONSchema(boatFileSchema, { io: 'input' }) as { required: string[] };
    expect(schema.required).toEqual(['boat', 'hull', 'foils', 'rig', 'crew', 'stability']);
  });
});
