/**
 * Water that rises from a water table into the root zone.
 */

/** How fast a soil lifts water: saturated conductivity Ks [mm d⁻¹], bubbling head ψb [m], exponent b of the retention curve [1]. */
export interface LiftingSoil {
  readonly conductivity: number;
  readonly bubblingHead: number;
  readonly exponent: number;
}

/**
 * Hydraulic properties by texture: printed geometric means of the pore-size index λ and the bubbling pressure hb [cm], total porosity [m³ m⁻³] and saturated
 * conductivity [cm h⁻¹], of about 1,300 soils of the United States. Spread within a class is large: the rise in one soil may be several times another's.
 * The table of Clapp & Hornberger 1978 is not taken: its conductivities and heads, put into `mostCapillaryRise`, lift 30 mm a day over 2 m of loam.
 *
 * Source: Rawls, Brakensiek & Saxton 1982, Estimation of soil water properties, Transactions of the ASAE 25(5), Table 2 (recalled, not re-read).
 */
const PRINTED = {
  sand: { poreIndex: 0.592, bubbling: 7.26, porosity: 0.437, conductivity: 21 },
  'loamy-sand': { poreIndex: 0.474, bubbling: 8.69, porosity: 0.437, conductivity: 6.11 },
  'sandy-loam': { poreIndex: 0.322, bubbling: 14.66, porosity: 0.453, conductivity: 2.59 },
  loam: { poreIndex: 0.22, bubbling: 11.15, porosity: 0.463, conductivity: 1.32 },
  'silt-loam': { poreIndex: 0.211, bubbling: 20.76, porosity: 0.501, conductivity: 0.68 },
  'sandy-clay-loam': { poreIndex: 0.25, bubbling: 28.08, porosity: 0.398, conductivity: 0.43 },
  'clay-loam': { poreIndex: 0.194, bubbling: 25.89, porosity: 0.464, conductivity: 0.23 },
  'silty-clay-loam': { poreIndex: 0.151, bubbling: 32.56, porosity: 0.471, conductivity: 0.15 },
  'sandy-clay': { poreIndex: 0.168, bubbling: 29.17, porosity: 0.43, conductivity: 0.12 },
  'silty-clay': { poreIndex: 0.127, bubbling: 34.19, porosity: 0.479, conductivity: 0.09 },
  clay: { poreIndex: 0.131, bubbling: 37.3, porosity: 0.475, conductivity: 0.06 },
} as const;

export type TextureClass = keyof typeof PRINTED;

/** Textures that have properties. */
export const TEXTURE_CLASSES = Object.keys(PRINTED) as readonly TextureClass[];

/**
 * Hydraulic properties of a texture class, as the season wants them.
 *
 *   ψb = hb / 100 [m];  b = 1 / λ;  Ks × 240 [mm d⁻¹]
 *
 * @example textureProperties('loam').conductivity // 316.8
 * Source: Rawls, Brakensiek & Saxton 1982, Table 2 (recalled, not re-read).
 */
export function textureProperties(texture: TextureClass): LiftingSoil & { readonly saturation: number } {
  const { poreIndex, bubbling, porosity, conductivity } = PRINTED[texture];
  return { conductivity: conductivity * 240, bubblingHead: bubbling / 100, exponent: 1 / poreIndex, saturation: porosity };
}

/**
 * Most that rises steadily from a water table to dry soil above it.
 *
 *   CR = Ks (1 + 1.5 / (n − 1)) (ψb / z)ⁿ, n = 2 + 3 / b, at most Ks
 *
 * z is the height of the root zone's lower edge over the water table. Where the table stands in the root zone or within its capillary fringe
 * the soil can bring Ks; how much of it is used the depletion of the root zone decides. The formula itself makes the rise negligible where the table is
 * deep, as FAO-56 takes it to be from about 1 m below the roots; in silty soils it can matter from further.
 * Missing: NaN in any input gives NaN out.
 *
 * @param soil Ks, ψb and b
 * @param height z, water table depth less root depth [m]
 * @returns [mm d⁻¹]
 * @example mostCapillaryRise(textureProperties('loam'), 1) // 1.76
 * Source: Gardner 1958, Soil Science 85; Eagleson 1978, Water Resources Research 14 (factor 1 + 1.5/(n − 1)); n by Brooks & Corey 1966 (recalled, not
 * re-read). FAO-56, text of Eq. 85, on the depth of 1 m.
 */
export function mostCapillaryRise(soil: LiftingSoil, height: number): number {
  if (height <= 0) return soil.conductivity;
  const n = 2 + 3 / soil.exponent;
  return Math.min(soil.conductivity, soil.conductivity * (1 + 1.5 / (n - 1)) * (soil.bubblingHead / height) ** n);
}
