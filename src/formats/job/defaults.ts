/**
 * What a job that leaves a field out gets, by path, in the unit of the field's name. The load has no entry: it is a face
 * pressure times the tool's area (`DEFAULT_PRESSURE`), and the tool's outline the cavity less the overcut and the stock.
 */
export const DEFAULTS = {
  'workpiece.cavityXMm': 0,
  'workpiece.cavityYMm': 0,
  'workpiece.backing': 'none',
  'tool.material': 'low_carbon_steel',
  'tool.edgeRadiusMm': 0.03,
  'tool.wearCompensated': true,
  'machine.frequencyKHz': 20,
  'machine.amplitudeUm': 20,
  'machine.lateralRunoutUm': 2,
  'machine.exitLoadShare': 1,
  'machine.horn.material': 'titanium',
  'machine.horn.loadingFactor': 0.9,
  'slurry.concentrationVolPercent': 30,
  'slurry.carrier': 'water',
  'slurry.delivery': 'flooded',
  'slurry.deliveryPressureKPa': 50,
  'slurry.renewal': 'fresh',
  'slurry.sumpLitres': 5,
  'slurry.usedMin': 0,
  'cut.quality': 'standard',
  'cut.seed': 1,
  'cut.replicates': 1,
} as const;

/** Face pressure of a job without a load (Pa): within what shops use, 0.05 to 0.5 MPa (common practice, from memory). */
export const DEFAULT_PRESSURE = 0.15e6;
/** Work left round a cavity and under it when the stock's size is not given (m); as much as the depth where that is more. */
export const DEFAULT_MARGIN = 5e-3;
