/** J/(kg K), dry air: ISO 2533:1975. */
export const GAS_CONSTANT_DRY = 287.05287;
/** J/(kg K), water vapour: molar gas constant 8.314472 J/(mol K) over 18.01528 g/mol, the constants of CIPM-2007. */
export const GAS_CONSTANT_VAPOUR = 8.314472 / 18.01528e-3;
/** kelvin */
export const ZERO_CELSIUS = 273.15;

export interface AirState {
  /** kelvin */
  temperature: number;
  /** pascal */
  pressure: number;
  /** relative humidity, 0..1 */
  humidity: number;
}

export interface AirProperties {
  /** kg/m³ */
  density: number;
  /** Pa s */
  dynamicViscosity: number;
  /** m²/s */
  kinematicViscosity: number;
  /** m/s, dry */
  speedOfSound: number;
  /** pascal: the share of the pressure that is water vapour */
  vapourPressure: number;
}

/**
 * Pressure of water vapour over a flat surface of water, pascal. `temperature` in kelvin, used from -40 to 60 °C.
 *
 * Source: Picard, Davis, Gläser, Fujii, Metrologia 45 (2008) 149-155 (CIPM-2007), appendix A1.1, without the enhancement factor.
 */
export function saturationPressure(temperature: number): number {
  return Math.exp(1.2378847e-5 * temperature ** 2 - 1.9121316e-2 * temperature + 33.93711047 - 6343.1645 / temperature);
}

/**
 * Sutherland's law with the constants of the standard atmosphere, 1.458e-6 T^1.5 / (T + 110.4), in Pa s; `temperature` in kelvin.
 *
 * Source: ISO 2533:1975; U.S. Standard Atmosphere 1976, equation 51.
 */
export function sutherlandViscosity(temperature: number): number {
  return (1.458e-6 * temperature ** 1.5) / (temperature + 110.4);
}

/**
 * Density and viscosity of air from its state.
 *
 * Density is that of a mixture of two ideal gases, dry air and water vapour; the vapour pressure is the relative humidity times the
 * saturation pressure of CIPM-2007 with its enhancement factor. Dry air is thereby exactly the air of ISO 2533 (1.2250 kg/m³ at
 * 15 °C and 101325 Pa). Against the real gas of CIPM-2007 this is up to 0.08 % too light between -10 and 40 °C (computed).
 *
 * Viscosity is that of dry air at any humidity: saturated air is about 1 % less viscous at 20 °C, 2 % at 30 °C (mixing rule of Wilke
 * 1950), which changes the Reynolds number only.
 *
 * @throws RangeError when temperature or pressure is not positive, humidity is not within 0..1, or vapour exceeds the pressure.
 */
export function airProperties(state: AirState): AirProperties {
  const { temperature, pressure, humidity } = state;
  if (!(temperature > 0 && Number.isFinite(temperature))) throw new RangeError(`temperature is ${temperature} K, must be positive`);
  if (!(pressure > 0 && Number.isFinite(pressure))) throw new RangeError(`pressure is ${pressure} Pa, must be positive`);
  if (!(humidity >= 0 && humidity <= 1)) throw new RangeError(`humidity is ${humidity}, must be within 0..1`);
  const celsius = temperature - ZERO_CELSIUS;
  const enhancement = 1.00062 + 3.14e-8 * pressure + 5.6e-7 * celsius ** 2;
  const vapourPressure = humidity === 0 ? 0 : humidity * enhancement * saturationPressure(temperature);
  if (vapourPressure > pressure)
    throw new RangeError(`water vapour of ${vapourPressure} Pa exceeds the pressure of ${pressure} Pa`);
  const density = ((pressure - vapourPressure) / GAS_CONSTANT_DRY + vapourPressure / GAS_CONSTANT_VAPOUR) / temperature;
  const dynamicViscosity = sutherlandViscosity(temperature);
  return {
    density,
    dynamicViscosity,
    kinematicViscosity: dynamicViscosity / density,
    speedOfSound: Math.sqrt(1.4 * GAS_CONSTANT_DRY * temperature),
    vapourPressure,
  };
}
