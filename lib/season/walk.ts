/**
 * One strip of a parcel through a season: the only place where soil water is stepped.
 *
 * Order of the day: roots grow → rain, melt and their runoff → irrigation is decided → the root zone refills and drains → water rises from below → the
 * surface layer is wetted → evaporation and transpiration → the balance is drawn up. Rain and irrigation fall early in the day, and water above field
 * capacity drains before the day's ET (see `refilledDepletion`), except where bunds hold it (`lib/crop/paddy`).
 *
 * Two stores close the balance exactly while the root depth changes: the root zone (depletion Dr) and the soil below it down to the deepest root of the run
 * (depletion Db). The surface layer (depletion De) is the separate account that FAO-56 keeps of the top of the root zone. Ponded fields have a third store,
 * X, of water above field capacity.
 *
 * The loop is one function with its state in locals: read from rows, written to rows, nothing allocated. The equations stand in `lib/crop`, one function
 * each with its source; here they are written out where a call would cost. The working of a day is recorded from the same locals.
 */
import { powerOfShare } from '../base/power.ts';
import { efficiencyOfDepth, netOfGross } from '../crop/application-efficiency.ts';
import { BARE_SOIL_COEFFICIENT, LEAST_EXPOSED } from '../crop/cover.ts';
import { REFILLED } from '../crop/irrigation-rule.ts';
import { pondDepth, pondSupply } from '../crop/paddy.ts';
import { FRACTION_HIGH, FRACTION_LOW } from '../crop/root-zone.ts';
import { curveNumberOfSurface, potentialRetention, surfaceRunoff } from '../crop/runoff.ts';
import { WETTING_RAIN } from '../crop/surface-layer.ts';
import type { Call } from './day-record.ts';
import { MARK } from './pack.ts';
import type { StripWalk } from './strip-walk.ts';
import { MISSING_STORED } from './types.ts';

const MOST_STORED = MISSING_STORED - 1;

/** Sets what the walk leaves behind: Dr, Db, De and X of the last evening, in `walk`. Returns the largest absolute balance residual [mm]. */
export function walkStrip(walk: StripWalk): number {
  const { days, lead, irrigate, single, ground, share, stateShare, daily, stored, storedAt, stageEt, plantingShare, heardDay } = walk;
  const { weather, curve, referenceEt: etRow } = walk;
  const netRow = walk.rows === null ? null : walk.rows.netRequirement;
  const grossRow = walk.rows === null ? null : walk.rows.grossRequirement;
  const adjustedRow = walk.rows === null ? null : walk.rows.adjustedCropEt;
  const { liquid: liquidRow, precipitation: rainRow, snowWater: snowRow, frozen: frozenRow, surfaceRunoff: runoffRow } = weather;
  const climateRow = weather.climate;
  const { basal: basalRow, height: heightRow, heightFactor: factorRow, available: availableRow, mark: markRow } = curve;
  const {
    scheduleAvailable: scheduleRow,
    covered: coveredRow,
    evaporationShare: mulchRow,
    openShare: openRow,
    saltStress: saltRow,
  } = curve;
  const { capillaryMost: capillaryRow, triggerShare: triggerRow, refillShare: refillRow, fixedDepth: fixedRow } = curve;
  const { tableFraction: tableRow, prescribed: prescribedRow, planting: plantingRow, stage: stageRow, deepestAvailable: deepest } = curve;
  const { readilyEvaporable, totalEvaporable, methodWetted, underCanopy, minimumDepth, most, percolationRate } = ground;
  const { efficiencyDepths, efficiencies, curveNumbers } = ground;
  const constantEfficiency = efficiencies.length === 1;
  const evaporableRange = totalEvaporable - readilyEvaporable;
  const kept = days - lead;
  const mayWater = MARK.mayIrrigate | MARK.due | MARK.recorded | MARK.refill | MARK.ponded;

  let availableBefore = availableRow[0];
  let depletion = walk.depletion;
  let below = walk.below;
  let surface = walk.surface;
  let pond = 0;
  let snowBefore = walk.snow;
  let wetted = 1;
  let exposed = 1;
  let drying = 1;
  let fraction = tableRow[0];
  let irrigating = false;
  let goal = 0;
  let owed = 0;
  let worst = 0;
  let percolated = 0;
  let stageOpen = -1;
  let stageSum = 0;
  let stageAdjusted = 0;

  for (let d = 0; d < days; d++) {
    const mark = markRow[d];
    const planted = (mark & MARK.planted) !== 0;
    const planting = plantingRow[d];
    const ponded = (mark & MARK.ponded) !== 0 && planting >= 0;
    const openingDepletion = depletion;
    const openingBelow = below;
    const openingSurface = surface;
    const openingPond = pond;
    const openingExposed = drying;

    // Roots: depletion changes hands with the water-holding capacity that does (`movedDepletion`).
    const available = availableRow[d];
    let moved = 0;
    if (available > availableBefore) {
      moved = available >= deepest ? below : (below * (available - availableBefore)) / (deepest - availableBefore);
    } else if (available < availableBefore) moved = -(depletion * (availableBefore - available)) / availableBefore;
    const grownDepletion = depletion + moved;
    const belowGrown = below - moved;

    // Rain and melt: runoff, the root zone, the soil below it, percolation. Bunds hold what does not enter.
    const liquid = liquidRow[d];
    let curveNumber = Number.NaN;
    let runoff = 0;
    if (liquid > 0 && !ponded) {
      if (frozenRow[d] !== 0) runoff = liquid;
      else if (curveNumbers !== null) {
        curveNumber = curveNumberOfSurface(curveNumbers, surface, readilyEvaporable, totalEvaporable);
        runoff = surfaceRunoff(liquid, potentialRetention(curveNumber));
      } else runoff = runoffRow[d];
    }
    const infiltration = liquid - runoff;
    let rainedDepletion = grownDepletion - infiltration;
    let rainExcess = 0;
    let rainedBelow = belowGrown;
    let deepPercolation = 0;
    let pondRained = 0;
    let released = 0;
    if (ponded) {
      rainedDepletion -= pond;
      if (rainedDepletion < 0) {
        pondRained = -rainedDepletion;
        rainedDepletion = 0;
      }
    } else {
      if (rainedDepletion < 0) {
        rainExcess = -rainedDepletion;
        rainedDepletion = 0;
        const keptBelow = Math.min(rainExcess, belowGrown);
        rainedBelow = belowGrown - keptBelow;
        deepPercolation = rainExcess - keptBelow;
      }
      if (pond > 0) released = pond;
    }

    // Irrigation: does the rule, the book or the pond call for water, and how much of it?
    const triggerFraction = (mark & MARK.firstDay) !== 0 ? tableRow[d] : fraction;
    let call: Call = 'none';
    let scheduleAvailable = available;
    let scheduleDepletion = rainedDepletion;
    let rainedSurface = 0;
    let calling = 0;
    let trigger = 0;
    let leaching = 0;
    let wanted = 0;
    let irrigation = 0;
    let gross = 0;
    let efficiency = efficiencies[0];
    let pores = 0;
    let bund = 0;
    if ((mark & mayWater) !== 0 || prescribedRow[d] > 0 || owed > 0) {
      scheduleAvailable = Math.max(available, Math.min(scheduleRow[d], deepest));
      if (scheduleAvailable >= deepest) scheduleDepletion = rainedDepletion + rainedBelow;
      else if (scheduleAvailable > available) {
        scheduleDepletion = rainedDepletion + (rainedBelow * (scheduleAvailable - available)) / (deepest - available);
      }
      // `callingDepletion` and `startingDepletion`
      const triggerShare = triggerRow[d];
      const fixedDepth = fixedRow[d];
      rainedSurface = surface > infiltration ? surface - infiltration : 0;
      calling = single ? scheduleDepletion : scheduleDepletion - drying * rainedSurface;
      if (calling < 0) calling = 0;
      trigger = triggerShare * triggerFraction * scheduleAvailable;
      if (fixedDepth > 0 && fixedDepth < trigger) trigger = fixedDepth;
      if (ponded) {
        pores = ground.pores[planting];
        bund = ground.bund[planting];
      }
      if (!irrigate) call = 'rain-fed';
      else if ((mark & MARK.recorded) !== 0) {
        gross = prescribedRow[d];
        irrigation = netOfGross(efficiencyDepths, efficiencies, gross);
        wanted = irrigation;
        call = 'recorded';
        irrigating = false;
      } else {
        if ((mark & MARK.refill) !== 0) owed += scheduleDepletion;
        else owed += prescribedRow[d];
        if (owed > 0) {
          call = (mark & MARK.refill) !== 0 ? 'refill' : 'prescribed';
          wanted = owed;
          irrigation = Math.min(owed, most);
          owed -= irrigation;
          irrigating = false;
        } else if (ponded) {
          const target = ground.pondTarget[planting];
          const minimum = irrigating ? target : ground.pondMinimum[planting];
          if (pondDepth(pondRained, pores) < minimum) wanted = pondSupply(rainedDepletion, pondRained, pores, target);
          call = wanted > 0 ? 'pond' : 'waits';
        } else if ((mark & (MARK.mayIrrigate | MARK.due)) !== 0) {
          // `runsShort`
          const short = triggerShare <= 1 && rainedDepletion > triggerFraction * available;
          if ((mark & MARK.due) !== 0) call = scheduleDepletion > 0 ? 'due' : 'waits';
          else if (scheduleDepletion - (irrigating ? goal : 0) <= REFILLED) call = 'waits';
          else if (irrigating) call = 'goes-on';
          else if (short) call = 'short';
          else call = calling >= trigger ? 'depletion' : 'waits';
          if (call !== 'waits') {
            leaching = planting >= 0 && fixedDepth === 0 ? ground.leachingRequirement[planting] : 0;
            if (call !== 'goes-on') goal = refillRow[d] === 1 ? 0 : (1 - refillRow[d]) * scheduleDepletion;
            wanted = fixedDepth > 0 ? fixedDepth : (scheduleDepletion - goal) / (1 - leaching); // `appliedDepth`
          }
        }
        if (wanted > 0 && owed === 0 && irrigation === 0) {
          if (!irrigating && wanted < minimumDepth) call = 'too-little';
          else irrigation = Math.min(wanted, most);
        }
        if (call !== 'prescribed' && call !== 'refill') {
          irrigating = irrigation > 0 && fixedDepth === 0 && (mark & MARK.due) === 0 && (wanted - irrigation) * (1 - leaching) > REFILLED;
        }
      }
      if (irrigation > 0) {
        if (!constantEfficiency) efficiency = efficiencyOfDepth(efficiencyDepths, efficiencies, irrigation);
        if (call !== 'recorded') gross = irrigation / efficiency;
      }
    } else irrigating = false;

    // Wetting: root zone, soil below, pond; what passes all of them is lost.
    let refilled = rainedDepletion;
    let belowWetted = rainedBelow;
    let irrigationExcess = 0;
    let irrigationKept = 0;
    let irrigationPercolation = 0;
    let spill = 0;
    let seepage = 0;
    let pondWetted = 0;
    if (ponded) {
      refilled = rainedDepletion - irrigation;
      if (refilled < 0) {
        pondWetted = pondRained - refilled;
        refilled = 0;
      } else pondWetted = pondRained;
      if (pondWetted > pores + bund) {
        spill = pondWetted - pores - bund;
        pondWetted = pores + bund;
        runoff = Math.min(spill, liquid);
        irrigationPercolation = spill - runoff;
      }
      seepage = Math.min(percolationRate, pondWetted);
      pondWetted -= seepage;
      irrigationExcess = seepage;
    } else if (irrigation > 0 || released > 0) {
      const passing = leaching * irrigation;
      refilled = rainedDepletion - (irrigation - passing) - released;
      if (refilled < 0) {
        irrigationExcess = passing - refilled;
        refilled = 0;
      } else irrigationExcess = passing;
    }
    if (irrigationExcess > 0) {
      irrigationKept = Math.min(irrigationExcess, belowWetted);
      belowWetted -= irrigationKept;
      irrigationPercolation += irrigationExcess - irrigationKept;
    }
    const wettedDepletion = refilled;
    let capillaryRise = 0;
    if (capillaryRow[d] > 0 && pondWetted === 0) {
      capillaryRise = Math.min(capillaryRow[d], refilled);
      refilled -= capillaryRise;
    }
    if (ponded) wetted = 1;
    else if (irrigation > 0) wetted = methodWetted;
    else if (liquid > WETTING_RAIN) wetted = 1;
    let wettedSurface = surface;
    if (!single) {
      wettedSurface = surface - infiltration - irrigation / methodWetted;
      if (wettedSurface < 0 || pondWetted > 0 || released > 0) wettedSurface = 0;
    }

    // Demand (Eq. 69, 71, 72, 74, 75, 76). Under snow neither crop nor soil takes water; frozen ground does not evaporate.
    const snow = snowRow[d];
    const referenceEt = snow > 0 ? 0 : etRow[d];
    const basal = basalRow[d];
    let maximum = Number.NaN;
    let covered = Number.NaN;
    let reduction = Number.NaN;
    let evaporationCoefficient = 0;
    if (!single) {
      maximum = 1.2 + climateRow[d] * factorRow[d];
      if (maximum < basal + 0.05) maximum = basal + 0.05;
      covered = coveredRow[d];
      if (!(covered >= 0)) {
        const ratio = (basal - BARE_SOIL_COEFFICIENT) / (maximum - BARE_SOIL_COEFFICIENT);
        covered = 0;
        // fc is at most the ratio itself, its exponent being at least 1: where the wet part is the smaller one anyway, the ratio will do
        if (ratio > 0) {
          const needed = underCanopy || wetted > 1 - ratio || d === heardDay;
          covered = needed ? powerOfShare(ratio, 1 + 0.5 * heightRow[d]) : ratio;
        }
      }
      covered = Math.min(covered, 1 - LEAST_EXPOSED);
      const reached = underCanopy && !ponded ? (1 - (2 / 3) * covered) * wetted : wetted;
      exposed = Math.max(LEAST_EXPOSED, Math.min(1 - covered, reached));
      reduction = wettedSurface <= readilyEvaporable ? 1 : (totalEvaporable - wettedSurface) / evaporableRange;
      if (reduction < 0) reduction = 0;
      const byEnergy = reduction * (maximum - basal);
      const bySurfaceWet = exposed * maximum;
      evaporationCoefficient = Math.min(byEnergy, bySurfaceWet) * mulchRow[d];
      if (frozenRow[d] !== 0 && !ponded) evaporationCoefficient = 0;
    }
    const cropEt = (basal + evaporationCoefficient) * referenceEt;
    if (planted) {
      fraction = Math.min(FRACTION_HIGH, Math.max(FRACTION_LOW, tableRow[d] + 0.04 * (5 - cropEt)));
    } else fraction = triggerFraction;

    // Use (Eq. 84, 92): ponded water first, then the root zone; transpiration before evaporation, together not past wilting point.
    const readily = fraction * available;
    let waterStress = 1;
    if (refilled > readily && pondWetted === 0) waterStress = Math.max(0, (available - refilled) / ((1 - fraction) * available));
    const saltStress = saltRow[d];
    const used = waterStress * saltStress;
    const stress = planted ? used : 1;
    let left = available - refilled;
    if (left < 0) left = 0;
    left += pondWetted;
    let transpiration = used * basal * referenceEt;
    if (transpiration > left) transpiration = left;
    let evaporation = evaporationCoefficient * referenceEt;
    if (evaporation > left - transpiration) evaporation = left - transpiration;
    if (pondWetted > 0) {
      const fromPond = Math.min(pondWetted, transpiration + evaporation);
      pond = pondWetted - fromPond;
      depletion = refilled + (transpiration + evaporation - fromPond);
    } else {
      pond = 0;
      depletion = refilled + transpiration + evaporation;
    }
    if (depletion > available) depletion = available;
    if (!single) {
      // Under plastic only the open share dries, as deep as open ground would; organic mulch slows the whole surface.
      drying = exposed * openRow[d];
      surface = drying > 0 ? wettedSurface + evaporation / drying : wettedSurface;
      if (surface > totalEvaporable) surface = totalEvaporable;
      if (pond > 0) surface = 0;
    }
    below = belowWetted;

    const entered = rainRow[d] + snowBefore - snow + irrigation + capillaryRise;
    const gone = runoff + evaporation + transpiration + deepPercolation + irrigationPercolation;
    const residual = entered - gone - (openingDepletion + openingBelow - depletion - below) - (pond - openingPond);
    if (residual > worst) worst = residual;
    else if (-residual > worst) worst = -residual;

    if (d === heardDay && walk.hear !== null) {
      const opening = { day: d, planted, planting, openingDepletion, openingBelow, openingSurface, openingPond, openingExposed };
      const roots = { availableBefore, available, deepest, moved, grownDepletion, belowGrown };
      const rain = { precipitation: rainRow[d], snowBefore, snowWater: snow, liquid, frozen: frozenRow[d] !== 0, ponded, curveNumber };
      const rained = { surfaceRunoff: runoff, infiltration, rainedDepletion, rainExcess, rainedBelow, deepPercolation };
      const rule = { call, scheduleAvailable, scheduleDepletion, rainedSurface, calling, triggerFraction, trigger, goal, wanted };
      const limits = { leachingRequirement: leaching, irrigation, efficiency, gross };
      const held = { pondRained, pores, bund, spill, seepage, released, pond: pondWetted };
      const passed = { irrigationExcess, irrigationKept, irrigationPercolation, wettedDepletion, capillaryRise, refilled, below };
      const demand = { referenceEt, basal, wettedSurface, wettedFraction: wetted, maximum, covered, exposedWetted: exposed, reduction };
      const stressed = { evaporationCoefficient, cropEt, depletionFraction: fraction, waterStress, saltStress, stress, left };
      const taken = { transpiration, evaporation, closingSurface: surface, closingDepletion: depletion, closingPond: pond, residual };
      walk.hear({ ...opening, ...roots, ...rain, ...rained, ...rule, ...limits, ...held, ...passed, ...demand, ...stressed, ...taken });
    }

    availableBefore = available;
    snowBefore = snow;
    percolated += deepPercolation + irrigationPercolation;
    if (d < lead) continue;
    const adjusted = transpiration + evaporation;
    const stageAt = planted ? 8 * planting + 2 * stageRow[d] : -1;
    if (stageAt !== stageOpen) {
      if (stageOpen >= 0) addStage(stageEt, plantingShare, stageOpen, stageSum, stageAdjusted);
      stageOpen = stageAt;
      stageSum = 0;
      stageAdjusted = 0;
    }
    stageSum += cropEt;
    stageAdjusted += adjusted;
    const whole = depletion + below;
    const effective = liquid - runoff - deepPercolation;
    if (stored !== null) {
      let i = storedAt + d - lead + kept;
      stored[i] = cropEt * 100 + 0.5;
      i += kept;
      stored[i] = adjusted * 100 + 0.5;
      i += kept;
      stored[i] = evaporation * 100 + 0.5;
      i += 2 * kept;
      if (liquid > 0) {
        stored[i] = Math.min(MOST_STORED, runoff * 100 + 0.5);
        stored[i + kept] = Math.min(MOST_STORED, Math.max(0, effective * 100 + 0.5));
        stored[i + 4 * kept] = Math.min(MOST_STORED, deepPercolation * 100 + 0.5);
      }
      if (irrigation > 0) {
        stored[i + 2 * kept] = Math.min(MOST_STORED, irrigation * 100 + 0.5);
        stored[i + 3 * kept] = Math.min(MOST_STORED, gross * 100 + 0.5);
      }
      i += 5 * kept;
      stored[i] = Math.min(MOST_STORED, depletion * 100 + 0.5);
      i += kept;
      stored[i] = Math.min(MOST_STORED, available * 100 + 0.5);
      i += kept;
      stored[i] = Math.min(MOST_STORED, readily * 100 + 0.5);
      i += kept;
      stored[i] = basal * 10000 + 0.5;
      i += kept;
      stored[i] = stress * 10000 + 0.5;
      i += kept;
      stored[i] = Math.min(MOST_STORED, whole * 100 + 0.5);
      i += kept;
      if (irrigationPercolation > 0) stored[i] = Math.min(MOST_STORED, irrigationPercolation * 100 + 0.5);
      if (capillaryRise > 0) stored[i + kept] = Math.min(MOST_STORED, capillaryRise * 100 + 0.5);
      if (pond > 0) stored[i + 3 * kept] = Math.min(MOST_STORED, pond * 100 + 0.5);
    } else if (daily !== null) {
      let i = d - lead + kept;
      daily[i] += share * cropEt;
      i += kept;
      daily[i] += share * adjusted;
      i += kept;
      daily[i] += share * evaporation;
      i += 2 * kept;
      daily[i] += share * runoff;
      i += kept;
      daily[i] += share * effective;
      i += kept;
      daily[i] += share * irrigation;
      i += kept;
      daily[i] += share * gross;
      i += kept;
      daily[i] += share * deepPercolation;
      i += kept;
      daily[i] += stateShare * depletion;
      i += kept;
      daily[i] += stateShare * available;
      i += kept;
      daily[i] += stateShare * readily;
      i += kept;
      daily[i] += share * basal;
      i += kept;
      daily[i] += stateShare * stress;
      i += kept;
      daily[i] += share * whole;
      i += kept;
      daily[i] += share * irrigationPercolation;
      i += kept;
      daily[i] += share * capillaryRise;
      i += 2 * kept;
      daily[i] += share * pond;
    } else {
      if (netRow !== null) netRow[d - lead] += share * irrigation;
      if (grossRow !== null) grossRow[d - lead] += share * gross;
      if (adjustedRow !== null) adjustedRow[d - lead] += share * adjusted;
    }
  }
  if (stageOpen >= 0) addStage(stageEt, plantingShare, stageOpen, stageSum, stageAdjusted);
  walk.depletion = depletion;
  walk.below = below;
  walk.surface = surface;
  walk.percolated = percolated + pond;
  return worst;
}

/** Adds what a stage of a planting used on this strip, over the planting's own area. */
function addStage(stageEt: Float64Array, plantingShare: Float64Array, at: number, cropEt: number, adjusted: number): void {
  const share = plantingShare[at >> 3];
  stageEt[at] += share * cropEt;
  stageEt[at + 1] += share * adjusted;
}
