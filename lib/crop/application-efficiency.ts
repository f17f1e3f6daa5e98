/**
 * What of the water brought to a field stays where the crop can take it: application efficiency by the depth applied, and the two ways between net and
 * gross.
 *
 * Efficiencies come as points by net depth, ascending; between them linear, beyond them the end values. One point is a constant efficiency.
 */

/** Depth of water that a flow brings in a day: 1 L s⁻¹ ha⁻¹ = 86.4 m³ d⁻¹ ha⁻¹ = 8.64 mm d⁻¹. */
export const FLOW_TO_DEPTH = 8.64;

/**
 * Application efficiency at a net depth.
 *
 *   Ea = Ea,k + (Ea,k+1 − Ea,k) (I − Ik) / (Ik+1 − Ik)
 *
 * Missing: NaN depth gives NaN where there is more than one point.
 *
 * @param depths net depths of the points [mm], ascending
 * @param efficiencies Ea of the points, 0–1
 * @param net net depth applied [mm]
 * @returns 0–1
 * @example efficiencyOfDepth([20, 60], [0.5, 0.7], 40) // 0.6
 * Source: definition of application efficiency; its dependence on depth is common practice, no source.
 */
export function efficiencyOfDepth(depths: ArrayLike<number>, efficiencies: ArrayLike<number>, net: number): number {
  const last = depths.length - 1;
  if (last === 0 || net <= depths[0]) return efficiencies[0];
  for (let k = 0; k < last; k++) {
    if (net > depths[k + 1]) continue;
    return efficiencies[k] + ((efficiencies[k + 1] - efficiencies[k]) * (net - depths[k])) / (depths[k + 1] - depths[k]);
  }
  return net > depths[last] ? efficiencies[last] : Number.NaN;
}

/**
 * Net depth of a gross depth, with the efficiency that goes with that net depth.
 *
 *   I = Ig Ea(I), solved on each straight piece of Ea; where several depths answer, the least
 *
 * Missing: NaN gross gives NaN.
 *
 * @param depths net depths of the points [mm], ascending
 * @param efficiencies Ea of the points, 0–1
 * @param gross gross depth [mm]
 * @returns [mm]
 * @example netOfGross([20, 60], [0.5, 0.7], 66.6667) // 40
 * Source: definition of application efficiency.
 */
export function netOfGross(depths: ArrayLike<number>, efficiencies: ArrayLike<number>, gross: number): number {
  const last = depths.length - 1;
  const shallow = gross * efficiencies[0];
  if (last === 0 || shallow <= depths[0]) return shallow;
  for (let k = 0; k < last; k++) {
    const slope = (efficiencies[k + 1] - efficiencies[k]) / (depths[k + 1] - depths[k]);
    const net = (gross * (efficiencies[k] - slope * depths[k])) / (1 - gross * slope);
    if (net >= depths[k] && net <= depths[k + 1]) return net;
  }
  return gross * efficiencies[last];
}
