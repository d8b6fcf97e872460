import { z } from '../zod.ts';
import { choice, flag, list, mm, property, quantity, um, words } from './fields.ts';
import { outline } from './schema-outline.ts';
import { cut, machine, slurry, tool } from './schema-sections.ts';

export type { OutlineFile, SimpleOutlineFile } from './schema-outline.ts';

const neighbour = z
  .strictObject({
    outline: outline('Neighbour outline', 'The other cavity in plan, about its own middle.'),
    xMm: mm(-1000, 1000, 'Neighbour position along x', "From the middle of this cavity to the other's."),
    yMm: mm(-1000, 1000, 'Neighbour position along y', "From the middle of this cavity to the other's."),
    depthMm: mm(0.005, 500, 'Neighbour depth', 'Depth of the other cavity.'),
  })
  .meta({ title: 'Neighbour', description: 'A cavity that is there already.', unit: '' });

/** Cavities that are there already. */
export const neighboursSchema = list(
  neighbour,
  0,
  100,
  'Neighbours',
  'Cavities that are there already, beside this one.',
);

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
    backing: choice(
      ['none', 'bonded'],
      'Backing',
      'What stands behind the exit face of a through-cut: nothing, or a plate bonded to it.',
    ).optional(),
    neighbours: neighboursSchema.optional(),
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
    depthMm: mm(0.005, 200, 'Depth', 'Depth of the cavity, as drawn; without it, through.').optional(),
    through: flag('Through', "Whether it goes through; the depth is then the workpiece's thickness.").optional(),
    limits: limits.optional(),
  })
  .meta({ title: 'Cavity', description: 'What is asked for.', unit: '' });

/** Most passes of one job. */
const MOST_PASSES = 12;

const pass = z
  .strictObject({
    title: words(200, 'Pass title', 'What the pass is called, as in Roughing.').optional(),
    stockUm: um(1, 20000, 'Stock', 'Work left per side and on the floor for the passes after it.').optional(),
    depthMm: mm(0.005, 200, 'Pass depth', 'Depth this pass goes to; without it, the depth less the stock.').optional(),
    tool: tool.optional(),
    slurry: slurry
      .partial()
      .meta({ title: 'Slurry of the pass', description: 'What differs from the slurry of the job.', unit: '' })
      .optional(),
    machine: machine.optional(),
  })
  .meta({
    title: 'Pass',
    description: 'One setting cutting to one depth; what it leaves out is as in the job.',
    unit: '',
  });

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
  passes: list(pass, 1, MOST_PASSES, 'Passes', 'Settings in order, roughing first; one pass when left out.').optional(),
  cut: cut.optional(),
});

/** A job as its file has it: only what was given. */
export type JobFile = z.infer<typeof jobSchema>;
/** One pass as a job file has it. */
export type PassFile = z.infer<typeof pass>;
/** The drawing's limits as a job file has them. */
export type LimitsFile = z.infer<typeof limits>;
