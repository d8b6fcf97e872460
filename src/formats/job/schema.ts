import { z } from '../zod.ts';
import { choice, count, property, quantity, words } from './fields.ts';

const mm = (min: number, max: number, title: string, description: string) =>
  quantity(min, max, 'mm', title, description);
const um = (min: number, max: number, title: string, description: string) =>
  quantity(min, max, 'um', title, description);

const cornerRadius = mm(0, 500, 'Corner radius', 'Radius of the corners in plan; 0 for sharp ones.').optional();

const kind = <const K extends string>(name: K) =>
  z.literal(name).meta({ title: 'Kind', description: 'Which outline this is.', unit: '' });

const circle = z.strictObject({
  kind: kind('circle'),
  diameterMm: mm(0.05, 300, 'Diameter', 'Diameter of the circle.'),
});
const rectangle = z.strictObject({
  kind: kind('rectangle'),
  lengthMm: mm(0.05, 500, 'Length', 'Side along x.'),
  widthMm: mm(0.05, 500, 'Width', 'Side along y.'),
  cornerRadiusMm: cornerRadius,
});
const slot = z.strictObject({
  kind: kind('slot'),
  lengthMm: mm(0.05, 500, 'Length', 'Over all, along x, round ends included.'),
  widthMm: mm(0.05, 500, 'Width', 'Across, along y; the ends are half circles of this diameter.'),
});
const regularPolygon = z.strictObject({
  kind: kind('regularPolygon'),
  sides: count(3, 60, 'Sides', 'Number of equal sides.'),
  acrossFlatsMm: mm(0.05, 300, 'Across flats', 'Twice the distance from the middle to a side.'),
  cornerRadiusMm: cornerRadius,
});
const ring = z.strictObject({
  kind: kind('ring'),
  outerDiameterMm: mm(0.05, 300, 'Outer diameter', 'Outer diameter of the trepanned ring.'),
  innerDiameterMm: mm(0.05, 300, 'Inner diameter', 'Diameter of the core that stays.'),
});

const outline = (title: string, description: string) =>
  z.discriminatedUnion('kind', [circle, rectangle, slot, regularPolygon, ring]).meta({ title, description, unit: '' });

const workpiece = z
  .strictObject({
    material: words(60, 'Material', 'Id of a workpiece material of the library, as in borosilicate_33.').optional(),
    youngsModulusGPa: property(1, 1500, 'GPa', "Young's modulus", 'Of the workpiece.').optional(),
    poisson: property(0, 0.49, '', "Poisson's ratio", 'Of the workpiece.').optional(),
    hardnessGPa: property(0.2, 100, 'GPa', 'Vickers hardness', 'Of the workpiece, as tables give it.').optional(),
    toughnessMPaSqrtM: property(0.1, 50, 'MPa m^0.5', 'Toughness', 'Long-crack K_Ic of the workpiece.').optional(),
    smallCrackToughnessMPaSqrtM: property(
      0.1,
      50,
      'MPa m^0.5',
      'Small-crack toughness',
      'Toughness a crack of 5 to 20 um meets; for glass and single crystals it is K_Ic.',
    ).optional(),
    densityKgM3: property(500, 25000, 'kg/m3', 'Density', 'Of the workpiece.').optional(),
    lengthMm: mm(0.1, 2000, 'Workpiece length', 'Along x.').optional(),
    widthMm: mm(0.1, 2000, 'Workpiece width', 'Along y.').optional(),
    thicknessMm: mm(0.02, 500, 'Workpiece thickness', 'Along the depth of the cavity.').optional(),
    cavityXMm: mm(
      -1000,
      1000,
      'Cavity position along x',
      "From the middle of the workpiece to the cavity's.",
    ).optional(),
    cavityYMm: mm(
      -1000,
      1000,
      'Cavity position along y',
      "From the middle of the workpiece to the cavity's.",
    ).optional(),
  })
  .meta({ title: 'Workpiece', description: 'What is cut: a block of one material.', unit: '' });

const limits = z
  .strictObject({
    entrySizeUpperMm: mm(
      -5,
      5,
      'Entry size, upper deviation',
      "Upper deviation of every entry size; for a ring's core the two are mirrored: a larger cavity is a smaller core.",
    ).optional(),
    entrySizeLowerMm: mm(-5, 5, 'Entry size, lower deviation', 'Lower deviation of every entry size.').optional(),
    taperDeg: quantity(0.001, 45, 'deg', 'Taper', 'Largest half-angle of the wall, per side.').optional(),
    floorFlatnessUm: um(0.05, 5000, 'Floor flatness', 'Largest form deviation of the floor.').optional(),
    cornerRadiusMm: mm(0.001, 50, 'Corner radius', 'Largest radius between floor and wall.').optional(),
    floorRaUm: um(0.005, 100, 'Floor Ra', 'Largest mean roughness of the floor.').optional(),
    edgeChipUm: um(0.5, 5000, 'Edge chip', 'Largest width of a chip on the entry face.').optional(),
    damageDepthUm: um(0.1, 5000, 'Damage depth', 'Largest depth of cracks under the floor, 99 % of hits.').optional(),
    timeMin: quantity(0.001, 100000, 'min', 'Time', 'Longest machining time.').optional(),
  })
  .meta({
    title: 'Limits',
    description: 'What the drawing asks for; what it leaves open is shown and not judged.',
    unit: '',
  });

const cavity = z
  .strictObject({
    outline: outline('Cavity outline', 'The cavity in plan, as drawn.'),
    depthMm: mm(0.005, 200, 'Depth', 'Depth of the cavity, as drawn.'),
    limits: limits.optional(),
  })
  .meta({ title: 'Cavity', description: 'What is asked for.', unit: '' });

const tool = z
  .strictObject({
    material: words(60, 'Tool material', 'Id of a tool material of the library, as in low_carbon_steel.').optional(),
    outline: outline('Tool outline', 'The tool in plan; without it, the cavity less the predicted overcut.').optional(),
    edgeRadiusMm: mm(0, 10, 'Tool edge radius', 'Radius between the face and the side of the new tool.').optional(),
  })
  .meta({ title: 'Tool', description: 'What is pressed in.', unit: '' });

const machine = z
  .strictObject({
    frequencyKHz: quantity(10, 100, 'kHz', 'Frequency', 'Of the vibration.').optional(),
    amplitudeUm: um(0.1, 200, 'Amplitude', 'Zero-to-peak at the tool face under load.').optional(),
    staticLoadN: quantity(0.001, 20000, 'N', 'Static load', 'Force that presses the tool on.').optional(),
    feedMmPerMin: quantity(
      0.001,
      100,
      'mm/min',
      'Feed',
      'Rate a feed-controlled machine sinks at, instead of a load.',
    ).optional(),
    lateralRunoutUm: um(0, 50, 'Lateral run-out', 'Sideways play of the tool face.').optional(),
  })
  .meta({ title: 'Machine', description: 'How the tool is driven.', unit: '' });

const slurry = z
  .strictObject({
    abrasive: words(60, 'Abrasive', 'Id of an abrasive of the library, as in b4c.'),
    grit: words(20, 'Grit', 'Grade: F4 to F2000 (FEPA, ISO 8486) or #240 to #8000 (JIS R 6001).').optional(),
    gritMethod: choice(
      ['photosedimentometer', 'sedimentationTube', 'electricalResistance', 'sieve'],
      'Grading method',
      'Table the grade is meant by; a bare F grade is by photosedimentometer or sieve, # by electrical resistance.',
    ).optional(),
    d50Um: um(0.2, 5000, 'Median grain', 'Median diameter by mass, instead of a grade.').optional(),
    spread: quantity(0.02, 1.5, '', 'Spread', 'Standard deviation of the logarithm of the diameter.').optional(),
    largestUm: um(0.3, 10000, 'Largest grain', 'Diameter no grain exceeds.').optional(),
    concentrationVolPercent: quantity(1, 60, 'vol%', 'Concentration', 'Volume of grit in the slurry.').optional(),
    carrier: choice(['water'], 'Carrier', 'Liquid that carries the grit.').optional(),
    delivery: choice(['flooded'], 'Delivery', 'How the slurry comes to the tool.').optional(),
    renewal: choice(['fresh'], 'Renewal', 'Whether the slurry is renewed.').optional(),
  })
  .meta({ title: 'Slurry', description: 'What does the cutting.', unit: '' });

const cut = z
  .strictObject({
    voxelUm: um(0.05, 500, 'Voxel', 'Edge of a voxel, instead of a quality.').optional(),
    quality: choice(['preview', 'standard', 'fine'], 'Quality', 'How finely the cut is resolved.').optional(),
    seed: count(0, 4294967295, 'Seed', 'Start of the random numbers; the same seed gives the same cut.').optional(),
    replicates: count(1, 1000, 'Replicates', 'How many cuts with different grits.').optional(),
  })
  .meta({ title: 'Cut', description: 'How the cut is computed.', unit: '' });

/** Schema version this program writes and reads. */
export const JOB_VERSION = 1;

/** The job file: one cavity to be made. Units are in the names; what is left out takes its default (`defaults.ts`). */
export const jobSchema = z.strictObject({
  spallwright: z
    .literal(JOB_VERSION)
    .meta({ title: 'Schema version', description: 'Version of the job file.', unit: '' }),
  title: words(200, 'Title', 'What the job is called.').optional(),
  note: words(5000, 'Note', 'Anything worth keeping.').optional(),
  workpiece,
  cavity,
  tool: tool.optional(),
  machine: machine.optional(),
  slurry,
  cut: cut.optional(),
});

/** A job as its file has it: only what was given. */
export type JobFile = z.infer<typeof jobSchema>;
/** An outline as a job file has it (mm). */
export type OutlineFile = z.infer<typeof circle | typeof rectangle | typeof slot | typeof regularPolygon | typeof ring>;
/** The drawing's limits as a job file has them. */
export type LimitsFile = z.infer<typeof limits>;
