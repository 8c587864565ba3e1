import { z } from 'zod';

/**
 * The boat file as people write it. Sizes and masses must be given; coefficients have defaults that suit a small boat
 * (common practice, no source). Strict, as the race file.
 */

const optional = <T extends z.ZodType>(schema: T) => schema.nullish();
const size = (most: number) => z.number().positive().max(most);
const share = z.number().nonnegative().max(5);
const notes = optional(z.unknown()).meta({ description: 'For people; the program reads no meaning from it.' });

const foil = z.strictObject({
  area_m2: size(10).meta({ description: 'Planform area below the hull.' }),
  span_m: size(10).meta({ description: 'Span below the hull.' }),
  sweep_deg: optional(z.number().min(-45).max(60)),
});

const resistanceRow = z.tuple([z.number().positive().max(40), z.number().positive()]);

const hull = z.strictObject({
  waterline_m: size(40),
  mass_kg: size(50_000).meta({ description: 'All but the crew.' }),
  wetted_m2: size(200).meta({ description: 'Wetted area of the bare hull with the usual crew aboard.' }),
  form_factor: optional(z.number().min(1).max(2)),
  residuary_factor: optional(z.number().min(0).max(5)),
  resistance: optional(z.array(resistanceRow).min(3)).meta({
    description: 'Towed upright, foils down, no leeway, usual crew: [knots, newtons], rising. Replaces the estimate.',
  }),
  heel_drag: optional(share).meta({ description: 'Share of resistance added at 30 degrees of heel.' }),
  wave_drag: optional(share).meta({ description: 'Share of resistance added by the waves of a fresh wind.' }),
});

const rig = z.strictObject({
  area_m2: size(500).meta({ description: 'Sail area upwind, jib included.' }),
  jib_m2: optional(z.number().nonnegative().max(500)),
  head_m: size(60).meta({ description: 'Top of the sail above the water.' }),
  centre_m: size(40).meta({ description: 'Centre of effort above the water.' }),
  efficiency: optional(z.number().min(0.2).max(1.2)),
  cl_max: optional(z.number().min(0.5).max(2.5)),
  camber_deg: optional(z.number().min(0).max(20)),
  viscous: optional(z.number().min(0).max(0.2)),
  parasite: optional(z.number().min(0).max(0.2)),
  windage_m2: size(50).meta({ description: 'Drag area of mast, rigging, crew and hull above the water.' }),
  sheeting_min_deg: optional(z.number().min(-5).max(45)),
  sheeting_max_deg: optional(z.number().min(45).max(120)),
});

const factor = z.number().min(0.2).max(5);

export const boatFileSchema = z
  .strictObject({
    $schema: optional(z.string()),
    boat: z.union([z.string().trim().min(1), z.number()]).transform(String),
    like: optional(z.string()).meta({ description: 'A built-in boat whose numbers hold where this file has none.' }),
    description: optional(z.string()),
    hull,
    foils: z.strictObject({
      board: foil,
      rudder: foil,
      gap: optional(z.number().min(0.4).max(1)),
      profile_drag: optional(z.number().min(0.002).max(0.1)),
    }),
    rig,
    crew: z.strictObject({
      mass_kg: size(5000),
      lever_m: size(5).meta({ description: 'Farthest the crew gets its weight from the centreline.' }),
    }),
    stability: z.strictObject({
      metacentric_height_m: z.number().min(0).max(5),
      heel_limit_deg: z.number().min(0).max(40).meta({ description: 'Heel at which the sail is eased.' }),
      heel_power: optional(z.number().min(1).max(10)),
    }),
    tuning: optional(
      z.strictObject({
        hull_resistance: optional(factor),
        rig_drag: optional(factor),
        righting_moment: optional(factor),
        foil_slope: optional(factor),
      }),
    ),
    notes,
  })
  .meta({ title: 'Legwork boat file' });

export type BoatFile = z.output<typeof boatFileSchema>;
