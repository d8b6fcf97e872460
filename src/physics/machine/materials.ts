import { TITANIUM_STRAIN_LIMIT } from '../fatigue.ts';
import type { ToolMaterial } from '../records.ts';

/** A metal horns are made of. */
export interface HornMaterial extends ToolMaterial {
  readonly name: string;
  /** Where the limit comes from. */
  readonly source: string;
}

type Row = readonly [
  name: string,
  youngsModulus: number,
  density: number,
  fatigueStrength: number,
  poisson: number,
  hardness: number,
  source: string,
];

function metal([name, youngsModulus, density, fatigueStrength, poisson, hardness, source]: Row): HornMaterial {
  return { name, youngsModulus, density, fatigueStrength, poisson, hardness, metal: true, source };
}

const titanium = metal([
  'titanium alloy, 6 Al 4 V',
  113.9e9,
  4430,
  496e6,
  0.33,
  3.42e9,
  'horns run to 0.25 % strain, beyond which losses rise steeply (Wuchinich 2004, 2002); fatigue 496 MPa along the bar at 1e7 cycles (table by Bowen)',
]);

/**
 * Horn metals with smooth, fully reversed limits. Moduli and densities give the bar speeds 5071, 3924, 3619, 5110,
 * 5036 and 4618 m/s. Poisson's ratios and hardnesses are from memory and enter no limit. Losses, and not strength
 * alone, limit high-strength steels (Wuchinich 2002), so their fatigue strength is not used.
 */
export const hornMaterials = {
  titanium: { ...titanium, strainLimit: TITANIUM_STRAIN_LIMIT },
  /** The same metal at a cautious design stress. */
  titaniumDesign: { ...titanium, fatigueStrength: 200e6, source: 'design stress 200 MPa, from memory' },
  aluminiumBronze: metal([
    'aluminium bronze',
    117e9,
    7598,
    185e6,
    0.32,
    1.9e9,
    'fatigue 185 MPa (El-Hofy, Fundamentals of Machining Processes); modulus from memory',
  ]),
  marineBronze: metal([
    'marine bronze',
    110e9,
    8399,
    150e6,
    0.34,
    1.3e9,
    'fatigue 150 MPa (El-Hofy, Fundamentals of Machining Processes); modulus from memory',
  ]),
  steel: metal(['low-carbon steel', 205.5e9, 7870, 200e6, 0.29, 1.3e9, 'about 200 MPa, from memory']),
  aluminium7075: metal(['aluminium alloy 7075', 71e9, 2800, 80e6, 0.33, 1.75e9, 'about 80 MPa, from memory']),
  nickelCopper: metal([
    'nickel-copper alloy',
    180e9,
    8440,
    200e6,
    0.32,
    2.8e9,
    'about 200 MPa, a rough figure from memory',
  ]),
} as const satisfies Record<string, HornMaterial>;
