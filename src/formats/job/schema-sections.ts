import { HORN_SHAPES, type HornShape } from '#src/physics/machine/waves.ts';
import { z } from '../zod.ts';
import { choice, count, flag, list, mm, quantity, um, words } from './fields.ts';
import { HORN_METALS } from './horn-metals.ts';
import { fileName, kind, outline } from './schema-outline.ts';

/** Most bores of one tool. */
const MOST_BORES = 200;

const bore = z
  .strictObject({
    xMm: mm(-500, 500, 'Bore position along x', "From the middle of the cavity to the bore's."),
    yMm: mm(-500, 500, 'Bore position along y', "From the middle of the cavity to the bore's."),
    diameterMm: mm(0.02, 100, 'Bore diameter', 'Diameter of the slurry bore.'),
  })
  .meta({ title: 'Bore', description: 'One slurry bore through the tool.', unit: '' });

const flatFace = z.strictObject({ kind: kind('flat') });
const steppedFace = z.strictObject({
  kind: kind('stepped'),
  pilot: outline('Pilot', 'Outline of the pilot that runs ahead, about the middle of the cavity.'),
  stepMm: mm(0.001, 200, 'Step', 'How far the pilot runs ahead of the shoulder.'),
});
const coneFace = z.strictObject({
  kind: kind('cone'),
  angleDeg: quantity(10, 178, 'deg', 'Cone angle', 'Whole angle at the tip, about the middle of the cavity.'),
});
const sphereFace = z.strictObject({
  kind: kind('sphere'),
  radiusMm: mm(0.02, 1000, 'Ball radius', 'Radius of the ball, about the middle of the cavity.'),
});
const reliefFace = z.strictObject({
  kind: kind('relief'),
  file: fileName('File', 'Greyscale PNG beside the job, 8 bits; white is the tip, black the deepest ground.'),
  lengthMm: mm(0.02, 500, 'Relief length', 'Of the picture along x, its middle on the middle of the cavity.'),
  widthMm: mm(0.02, 500, 'Relief width', 'Of the picture along y.'),
  heightMm: mm(0.001, 50, 'Relief height', 'From black to white.'),
});

/** The form of a tool's face. */
export const faceSchema = z
  .discriminatedUnion('kind', [flatFace, steppedFace, coneFace, sphereFace, reliefFace])
  .meta({ title: 'Tool face', description: 'Form of the face; flat when left out.', unit: '' });

/** Slurry bores of a tool. */
export const boresSchema = list(bore, 0, MOST_BORES, 'Bores', 'Slurry bores through the tool; none when left out.');

/** What is pressed in. */
export const tool = z
  .strictObject({
    material: words(60, 'Tool material', 'Id of a tool material of the library, as in low_carbon_steel.').optional(),
    outline: outline(
      'Tool outline',
      "The tool in plan; without it, the cavity less the predicted overcut and the stock. Points and drawings use the cavity's coordinates.",
    ).optional(),
    edgeRadiusMm: mm(0, 10, 'Tool edge radius', 'Radius between the face and the side of the new tool.').optional(),
    face: faceSchema.optional(),
    bores: boresSchema.optional(),
    lengthMm: mm(
      0.1,
      500,
      'Tool length',
      "From the horn's end to the tool's face; a long tool detunes the horn.",
    ).optional(),
    wearLengthMm: mm(0.001, 200, 'Length for wear', 'Length that may wear away before the tool is done.').optional(),
    wearCompensated: flag(
      'Wear compensated',
      'Whether the machine goes deeper by what the tool has lost; otherwise the cavity is shallower by it.',
    ).optional(),
  })
  .meta({ title: 'Tool', description: 'What is pressed in.', unit: '' });

/** The horn between transducer and tool. */
export const hornSchema = z
  .strictObject({
    shape: choice(HORN_SHAPES as readonly [HornShape, ...HornShape[]], 'Horn shape', 'Profile of the half-wave horn.'),
    material: choice(HORN_METALS, 'Horn material', 'Metal of the horn.').optional(),
    largeDiameterMm: mm(1, 300, 'Large diameter', 'Diameter of the horn at the transducer.'),
    smallDiameterMm: mm(0.5, 300, 'Small diameter', 'Diameter of the horn at the tool.'),
    tuned: flag('Tuned', 'Whether the horn was shortened for this tool, so that it does not detune.').optional(),
    loadingFactor: quantity(0.3, 1, '', 'Loading factor', 'Amplitude under load over the free one.').optional(),
  })
  .meta({ title: 'Horn', description: "What enlarges the transducer's amplitude.", unit: '' });

/** How the tool is driven. */
export const machine = z
  .strictObject({
    frequencyKHz: quantity(10, 100, 'kHz', 'Frequency', 'Of the vibration.').optional(),
    amplitudeUm: um(0.1, 200, 'Amplitude', 'Zero-to-peak at the tool face under load.').optional(),
    transducerAmplitudeUm: um(
      0.1,
      60,
      'Transducer amplitude',
      'Zero-to-peak at the transducer, instead of amplitudeUm; the horn enlarges it.',
    ).optional(),
    horn: hornSchema.optional(),
    staticLoadN: quantity(0.001, 20000, 'N', 'Static load', 'Force that presses the tool on.').optional(),
    feedMmPerMin: quantity(
      0.001,
      100,
      'mm/min',
      'Feed',
      'Rate a feed-controlled machine sinks at, instead of a load.',
    ).optional(),
    lateralRunoutUm: um(0, 50, 'Lateral run-out', 'Sideways play of the tool face.').optional(),
    exitLoadShare: quantity(
      0.05,
      1,
      '',
      'Load at the exit',
      'Share of the load that is kept before a breakthrough.',
    ).optional(),
    exitFromMm: mm(
      0.001,
      200,
      'Load taken back from',
      'Work left under the tool when the load is taken back.',
    ).optional(),
  })
  .meta({ title: 'Machine', description: 'How the tool is driven.', unit: '' });

/** What does the cutting. */
export const slurry = z
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
    carrier: choice(['water', 'oil'], 'Carrier', 'Liquid that carries the grit.').optional(),
    carrierViscosityMPaS: quantity(
      0.2,
      2000,
      'mPa s',
      'Carrier viscosity',
      "Of the liquid, in place of the carrier's own.",
    ).optional(),
    delivery: choice(
      ['flooded', 'throughTool', 'suction'],
      'Delivery',
      "How the slurry comes to the tool: from around it, pumped in through the tool's bores, or drawn off through them.",
    ).optional(),
    deliveryPressureKPa: quantity(
      0.1,
      2000,
      'kPa',
      'Delivery pressure',
      'Pressure above, for suction below, the surrounding one.',
    ).optional(),
    renewal: choice(
      ['fresh', 'recirculated'],
      'Renewal',
      'Whether the slurry is always fresh, or goes round and wears.',
    ).optional(),
    sumpLitres: quantity(0.001, 2000, 'L', 'Sump', 'Volume of the slurry that goes round.').optional(),
    usedMin: quantity(0, 100000, 'min', 'Used before', 'Time this slurry has been cutting before.').optional(),
  })
  .meta({ title: 'Slurry', description: 'What does the cutting.', unit: '' });

/** How the cut is computed. */
export const cut = z
  .strictObject({
    voxelUm: um(0.05, 500, 'Voxel', 'Edge of a voxel, instead of a quality.').optional(),
    quality: choice(['preview', 'standard', 'fine'], 'Quality', 'How finely the cut is resolved.').optional(),
    seed: count(0, 4294967295, 'Seed', 'Start of the random numbers; the same seed gives the same cut.').optional(),
    replicates: count(1, 1000, 'Replicates', 'How many cuts with different grits.').optional(),
  })
  .meta({ title: 'Cut', description: 'How the cut is computed.', unit: '' });
