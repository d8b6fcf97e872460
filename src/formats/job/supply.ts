import { SECONDS_PER_MINUTE } from '#src/base/units.ts';
import type { Delivery, SlurrySupply } from '#src/physics/pass.ts';
import { CARRIERS, type Carrier } from '#src/physics/slurry/viscosity.ts';
import { type Desk, orDefault, type PartialJob, refuse } from './desk.ts';

type SlurryFields = NonNullable<PartialJob['slurry']>;

const PASCAL_SECONDS_PER_MILLIPASCAL_SECOND = 1e-3;
const PASCALS_PER_KILOPASCAL = 1e3;
const CUBIC_METRES_PER_LITRE = 1e-3;
/** Largest suction (kPa): short of one atmosphere, at which the liquid boils. */
const LARGEST_SUCTION = 95;

function carrierOf(desk: Desk, slurry: SlurryFields): Carrier {
  const carrier = CARRIERS[orDefault(desk, 'slurry.carrier', slurry.carrier)];
  const own = slurry.carrierViscosityMPaS;
  return own === undefined ? carrier : { ...carrier, viscosity: own * PASCAL_SECONDS_PER_MILLIPASCAL_SECOND };
}

function deliveryOf(desk: Desk, slurry: SlurryFields): Delivery | undefined {
  const kind = orDefault(desk, 'slurry.delivery', slurry.delivery);
  const given = slurry.deliveryPressureKPa;
  if (kind === 'flooded') {
    if (given === undefined) return { kind };
    const message =
      'Slurry that floods the tool is under no pressure. Take it out, or enter throughTool or suction as the delivery.';
    return refuse(desk, 'slurry.deliveryPressureKPa', given, 'nothing beside flooded', message);
  }
  const pressure = orDefault(desk, 'slurry.deliveryPressureKPa', given);
  if (kind === 'suction' && pressure > LARGEST_SUCTION) {
    const message = 'Suction cannot be more than the air presses: the slurry would boil. Enter less.';
    return refuse(desk, 'slurry.deliveryPressureKPa', pressure, `up to ${LARGEST_SUCTION} kPa`, message);
  }
  return { kind, pressure: pressure * PASCALS_PER_KILOPASCAL };
}

function chargeOf(desk: Desk, slurry: SlurryFields): SlurrySupply['charge'] {
  const { sumpLitres, usedMin } = slurry;
  if (orDefault(desk, 'slurry.renewal', slurry.renewal) === 'recirculated') {
    return {
      volume: orDefault(desk, 'slurry.sumpLitres', sumpLitres) * CUBIC_METRES_PER_LITRE,
      used: orDefault(desk, 'slurry.usedMin', usedMin) * SECONDS_PER_MINUTE,
    };
  }
  for (const [name, value] of Object.entries({ sumpLitres, usedMin })) {
    if (value === undefined) continue;
    const message = 'Fresh slurry is used once. Take it out, or enter recirculated as the renewal.';
    refuse(desk, `slurry.${name}`, value, 'nothing beside fresh', message);
  }
  return undefined;
}

/** The slurry beside its grit: carrier, delivery, renewal; undefined where its fields contradict each other. */
export function supplyOf(desk: Desk, slurry: SlurryFields): SlurrySupply | undefined {
  const carrier = carrierOf(desk, slurry);
  const delivery = deliveryOf(desk, slurry);
  const charge = chargeOf(desk, slurry);
  return delivery && { carrier, delivery, ...(charge && { charge }) };
}
