import {
  HERTZ_PER_KILOHERTZ,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  MICROMETRES_PER_METRE,
} from '#src/base/units.ts';
import { tipAmplitude } from '#src/physics/machine/amplitude.ts';
import { diameterRatio, type Horn, hornCharacter } from '#src/physics/machine/horn.ts';
import { formatNumber } from '../numbers.ts';
import { type Desk, orDefault, type PartialJob, refuse } from './desk.ts';
import { hornMetal } from './horn-metals.ts';
import { hornSchema } from './schema-sections.ts';

/** The horn of a job, with how it is used. */
export interface JobHorn {
  readonly horn: Horn;
  readonly tuned: boolean;
  readonly loadingFactor: number;
  readonly gain: number;
}

/** What makes the tool vibrate. SI. */
export interface Vibration {
  /** Zero-to-peak at the tool face under load (m); undefined where the fields contradict each other. */
  readonly amplitude: number | undefined;
  readonly frequency: number;
  readonly horn: JobHorn | undefined;
}

type MachineFields = NonNullable<PartialJob['machine']>;

function hornOf(desk: Desk, file: MachineFields['horn']): JobHorn | undefined {
  const whole = hornSchema.safeParse(file);
  if (!whole.success) return undefined;
  const { shape, largeDiameterMm, smallDiameterMm, tuned = false, material, loadingFactor } = whole.data;
  if (smallDiameterMm > largeDiameterMm) {
    const message = 'A horn is narrower at the tool than at the transducer. Swap the two diameters.';
    return refuse(
      desk,
      'machine.horn.smallDiameterMm',
      smallDiameterMm,
      `at most largeDiameterMm, ${largeDiameterMm} mm`,
      message,
    );
  }
  if (shape === 'uniform' && smallDiameterMm !== largeDiameterMm) {
    const message = 'A uniform horn has one diameter. Enter the same for both, or another shape.';
    return refuse(
      desk,
      'machine.horn.smallDiameterMm',
      smallDiameterMm,
      `largeDiameterMm, ${largeDiameterMm} mm`,
      message,
    );
  }
  const horn: Horn = {
    shape,
    inputDiameter: largeDiameterMm * METRES_PER_MILLIMETRE,
    outputDiameter: smallDiameterMm * METRES_PER_MILLIMETRE,
    material: hornMetal(orDefault(desk, 'machine.horn.material', material)),
  };
  return {
    horn,
    tuned,
    loadingFactor: orDefault(desk, 'machine.horn.loadingFactor', loadingFactor),
    gain: hornCharacter(shape, diameterRatio(horn)).gain,
  };
}

function amplitudeOf(desk: Desk, machine: MachineFields, horn: JobHorn | undefined): number | undefined {
  const { amplitudeUm, transducerAmplitudeUm } = machine;
  if (transducerAmplitudeUm === undefined) {
    return orDefault(desk, 'machine.amplitudeUm', amplitudeUm) * METRES_PER_MICROMETRE;
  }
  if (amplitudeUm !== undefined) {
    const message = 'The amplitude is given at the tool and at the transducer. Take one of the two out.';
    return refuse(
      desk,
      'machine.transducerAmplitudeUm',
      transducerAmplitudeUm,
      'amplitudeUm or transducerAmplitudeUm',
      message,
    );
  }
  if (!horn) {
    if (machine.horn !== undefined) return undefined;
    const message =
      "Missing. From the transducer's amplitude the horn makes that of the tool: give the horn, or amplitudeUm.";
    return refuse(desk, 'machine.horn', undefined, 'shape, largeDiameterMm and smallDiameterMm', message);
  }
  const amplitude = tipAmplitude(transducerAmplitudeUm * METRES_PER_MICROMETRE, horn);
  const um = formatNumber(amplitude * MICROMETRES_PER_METRE, 3);
  const gain = formatNumber(horn.gain, 3);
  const kept = formatNumber(100 * horn.loadingFactor, 3);
  desk.notes.push(
    `The horn makes ${um} um at the tool of ${transducerAmplitudeUm} um at the transducer: gain ${gain}, ${kept} % of it under load.`,
  );
  return amplitude;
}

/** Amplitude, frequency and horn. */
export function vibrationOf(desk: Desk, machine: MachineFields): Vibration {
  const horn = machine.horn === undefined ? undefined : hornOf(desk, machine.horn);
  return {
    amplitude: amplitudeOf(desk, machine, horn),
    frequency: orDefault(desk, 'machine.frequencyKHz', machine.frequencyKHz) * HERTZ_PER_KILOHERTZ,
    horn,
  };
}

/** Feed of a feed-controlled machine (m/s); undefined for one driven by a load. */
export function feedOf(machine: MachineFields): number | undefined {
  const { feedMmPerMin } = machine;
  return feedMmPerMin === undefined ? undefined : feedMmPerMin * METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE;
}
