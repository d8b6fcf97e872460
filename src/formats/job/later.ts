/** Fields of the job that a later version will act on, and what to do until then. Refused, never ignored. */
export const LATER_FIELDS: Readonly<Record<string, string>> = {
  passes: 'This version cuts one pass, which tool, slurry and machine state. Take passes out.',
  'tool.bores': 'This version cuts with a tool face without slurry bores. Take bores out.',
  'tool.wearLengthMm': 'This version does not check the length left for wear. Take wearLengthMm out.',
  'slurry.carrierViscosityMPaS': 'This version knows water only as the carrier. Take carrierViscosityMPaS out.',
  'slurry.deliveryPressureKPa': 'This version knows flooding only. Take deliveryPressureKPa out.',
};

/** Values of known fields that a later version will act on. */
export const LATER_VALUES: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  'slurry.carrier': { oil: 'This version knows water only as the carrier. Enter water.' },
  'slurry.delivery': {
    throughTool: 'This version does not deliver slurry through the tool. Enter flooded.',
    suction: 'This version does not draw slurry through the tool. Enter flooded.',
  },
  'slurry.renewal': { recirculated: 'This version does not follow slurry that wears. Enter fresh.' },
  'cavity.outline.kind': { polygon: 'This version does not cut free polygons.' },
  'tool.outline.kind': { polygon: 'This version does not cut with free polygons.' },
};
