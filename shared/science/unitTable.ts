import { CELSIUS_ZERO_K, PROTON_GAMMA_MHz_per_T } from './constants'

export type Dimension =
  | 'time' | 'rate' | 'concentration' | 'relaxivity' | 'temperature' | 'field' | 'frequency' | 'signal' | 'fraction' | 'length' | 'shift'
  | 'angle' | 'dose' | 'amount' | 'volume' | 'mass' | 'rateSecondOrder' | 'rateThirdOrder' | 'energy' | 'pulseField' | 'potential' | 'none'

/** One unit: stored = value·times/over + plus, over and times exact so that 12 ms is the double nearest to 0.012. */
export interface UnitRow {
  readonly symbol: string
  readonly spellings: readonly string[]
  readonly times: number
  readonly over: number
  readonly plus: number
}

function unit(symbol: string, spellings: readonly string[] = [], times = 1, over = 1, plus = 0): UnitRow {
  return { symbol, spellings, times, over, plus }
}

/** The first unit of each dimension is the one values are stored in. */
export const UNIT_ROWS: Readonly<Record<Dimension, readonly UnitRow[]>> = {
  time: [
    unit('s', ['sec', 'second', 'seconds']), unit('ms', ['msec', 'millisecond', 'milliseconds'], 1, 1e3),
    unit('µs', ['us', 'usec', 'microsecond', 'microseconds'], 1, 1e6), unit('ns', ['nanosecond', 'nanoseconds'], 1, 1e9),
    unit('min', ['mins', 'minute', 'minutes'], 60), unit('h', ['hr', 'hrs', 'hour', 'hours'], 3600), unit('d', ['day', 'days'], 86400),
  ],
  rate: [
    unit('s^-1', ['1/s', '/s', 'per_s', 'per s', 'Hz']), unit('ms^-1', ['1/ms', '/ms', 'per_ms'], 1e3),
    unit('min^-1', ['1/min', '/min', 'per_min'], 1, 60), unit('h^-1', ['1/h', '/h', 'per_h'], 1, 3600), unit('d^-1', ['1/d', '/d', 'per_d'], 1, 86400),
  ],
  concentration: [
    unit('mM', ['mmol/L', 'mmol/l', 'mmol L^-1', 'mmol l^-1', 'mol/m3', 'mol/m^3', 'millimolar']),
    unit('M', ['mol/L', 'mol/l', 'mol L^-1', 'mol l^-1', 'mol/dm3', 'mol/dm^3', 'molar'], 1e3),
    unit('µM', ['uM', 'µmol/L', 'umol/L', 'µmol/l', 'umol/l', 'micromolar'], 1, 1e3), unit('nM', ['nmol/L', 'nmol/l', 'nanomolar'], 1, 1e6),
  ],
  relaxivity: [
    unit('mM^-1 s^-1', ['per_mM_s', '1/(mM s)', '1/(mM*s)', '1/mM/s', '/mM/s', 's^-1 mM^-1', 'L/(mmol s)', 'L mmol^-1 s^-1']),
    unit('M^-1 s^-1', ['per_M_s', '1/(M s)', '1/(M*s)', 'L/(mol s)', 'L mol^-1 s^-1'], 1, 1e3),
  ],
  temperature: [unit('K', ['kelvin']), unit('°C', ['C', 'degC', 'deg C', 'celsius', 'degree celsius', 'degrees celsius'], 1, 1, CELSIUS_ZERO_K)],
  field: [
    unit('T', ['tesla']), unit('mT', ['millitesla'], 1, 1e3), unit('G', ['gauss'], 1, 1e4),
    unit('MHz', ['MHz (1H)', 'MHz 1H', 'megahertz'], 1, PROTON_GAMMA_MHz_per_T),
  ],
  frequency: [unit('Hz', ['hertz']), unit('kHz', ['kilohertz'], 1e3), unit('MHz', ['megahertz'], 1e6)],
  signal: [unit('au', ['a.u.', 'arb', 'arb.', 'arb. unit', 'arb. units', 'arbitrary units', 'counts', '1'])],
  fraction: [unit('', ['1', 'fraction', 'frac']), unit('%', ['percent', 'per cent', 'pct'], 1, 100), unit('ppm', ['parts per million'], 1, 1e6)],
  length: [
    unit('m', ['metre', 'metres']), unit('mm', ['millimetre', 'millimetres'], 1, 1e3), unit('nm', ['nanometre', 'nanometres'], 1, 1e9),
    unit('Å', ['A', 'angstrom', 'angstroms'], 1, 1e10), unit('pm', ['picometre', 'picometres'], 1, 1e12),
  ],
  shift: [unit('ppm', ['parts per million']), unit('ppb', ['parts per billion'], 1, 1e3)],
  angle: [unit('rad', ['radian', 'radians']), unit('°', ['deg', 'degree', 'degrees'], Math.PI, 180)],
  dose: [unit('mmol/kg', ['mmol kg^-1', 'mmol_per_kg']), unit('µmol/kg', ['umol/kg', 'µmol kg^-1', 'umol kg^-1'], 1, 1e3)],
  amount: [unit('mol', ['mole', 'moles']), unit('mmol', ['millimole', 'millimoles'], 1, 1e3), unit('µmol', ['umol', 'micromole', 'micromoles'], 1, 1e6)],
  volume: [unit('L', ['l', 'litre', 'litres']), unit('mL', ['ml', 'millilitre', 'millilitres'], 1, 1e3), unit('µL', ['uL', 'ul', 'µl', 'microlitre', 'microlitres'], 1, 1e6)],
  mass: [unit('g', ['gram', 'grams']), unit('mg', ['milligram', 'milligrams'], 1, 1e3), unit('kg', ['kilogram', 'kilograms'], 1e3)],
  rateSecondOrder: [
    unit('M^-1 s^-1', ['per_M_s', '1/(M s)', '1/(M*s)', 'L/(mol s)', 'L mol^-1 s^-1']), unit('mM^-1 s^-1', ['per_mM_s', '1/(mM s)'], 1e3),
  ],
  rateThirdOrder: [unit('M^-2 s^-1', ['per_M2_s', '1/(M^2 s)', 'L^2 mol^-2 s^-1'])],
  energy: [unit('kJ/mol', ['kJ mol^-1', 'kJ_per_mol']), unit('J/mol', ['J mol^-1', 'J_per_mol'], 1, 1e3), unit('kcal/mol', ['kcal mol^-1'], 4184, 1e3)],
  pulseField: [unit('µT', ['uT', 'microtesla']), unit('T', ['tesla'], 1e6)],
  potential: [unit('mV', ['millivolt', 'millivolts']), unit('V', ['volt', 'volts'], 1e3)],
  none: [unit('', ['1', '-', 'none'])],
}
