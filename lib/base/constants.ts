/**
 * Physical constants, each named for its use. Publications round the same quantity differently; a constant is shared only where the
 * publication is the same. FAO-56 = Allen, Pereira, Raes & Smith (1998), FAO Irrigation and Drainage Paper 56. ASCE 2005 = ASCE-EWRI,
 * The ASCE Standardized Reference Evapotranspiration Equation (values of that report are recalled, not re-read).
 */

/** Offset to absolute temperature in the long-wave term [K]. Source: FAO-56 Eq. 39, which prints 273.16. */
export const LONGWAVE_KELVIN_OFFSET = 273.16;
/** Offset to absolute temperature in the aerodynamic term of the combination equation [K]. Source: FAO-56 Eq. 6, which prints 273. */
export const AERODYNAMIC_KELVIN_OFFSET = 273;
/** Offset of the Celsius scale [K], exact. Source: SI Brochure, 9th ed. (2019), section 2.3.1. */
export const CELSIUS_OFFSET = 273.15;

/** Stefan–Boltzmann constant per day [MJ K⁻⁴ m⁻² d⁻¹]. Source: FAO-56 Eq. 39. */
export const STEFAN_BOLTZMANN_DAY_FAO56 = 4.903e-9;
/** Stefan–Boltzmann constant per day [MJ K⁻⁴ m⁻² d⁻¹]. Source: ASCE 2005 Eq. 17 (recalled, not re-read). */
export const STEFAN_BOLTZMANN_DAY_ASCE2005 = 4.901e-9;
/** Stefan–Boltzmann constant per hour [MJ K⁻⁴ m⁻² h⁻¹]. Source: FAO-56 chapter 4, calculation procedure for hourly time steps. */
export const STEFAN_BOLTZMANN_HOUR_FAO56 = 2.043e-10;
/** Stefan–Boltzmann constant per hour [MJ K⁻⁴ m⁻² h⁻¹]. Source: ASCE 2005 Eq. 44 (recalled, not re-read). */
export const STEFAN_BOLTZMANN_HOUR_ASCE2005 = 2.042e-10;
/** Stefan–Boltzmann constant [W m⁻² K⁻⁴], from the exact SI constants. Source: CODATA 2018. */
export const STEFAN_BOLTZMANN_SI = 5.670374419e-8;

/** Solar constant [MJ m⁻² min⁻¹]. Source: FAO-56 Eq. 21. The same as 4.92 MJ m⁻² h⁻¹ in ASCE 2005. */
export const SOLAR_CONSTANT = 0.082;
/** Albedo of the reference surfaces. Source: FAO-56 Eq. 38. */
export const REFERENCE_ALBEDO = 0.23;
/** Von Kármán's constant. Source: FAO-56 Eq. 4. */
export const VON_KARMAN = 0.41;

/** Specific heat of moist air at constant pressure [MJ kg⁻¹ °C⁻¹]. Source: FAO-56 Eq. 8. */
export const AIR_SPECIFIC_HEAT = 1.013e-3;
/** Ratio of the molecular weights of water vapour and dry air. Source: FAO-56 Eq. 8. */
export const VAPOUR_WEIGHT_RATIO = 0.622;
/** Latent heat of vaporisation taken as constant [MJ kg⁻¹]. Source: FAO-56 Eq. 8 and Annex 3 Eq. 3-1 at about 20 °C. */
export const LATENT_HEAT = 2.45;
/** Water depth evaporated by a unit of energy [mm per MJ m⁻²]. Source: FAO-56 Eq. 20, which prints 0.408. */
export const EVAPORATED_DEPTH_PER_ENERGY = 0.408;
/** γ per unit of pressure [°C⁻¹]. Source: FAO-56 Eq. 8, which prints 0.665 × 10⁻³. */
export const PSYCHROMETRIC_RATIO = 0.665e-3;
/** Volumetric heat capacity of soil [MJ m⁻³ °C⁻¹]. Source: FAO-56 Eq. 42. */
export const SOIL_HEAT_CAPACITY = 2.1;
/** Mean radius of the Earth [m]. Source: Moritz (2000), Geodetic Reference System 1980, Journal of Geodesy 74, R1. */
export const EARTH_MEAN_RADIUS = 6371008.8;
