/**
 * Cautions that stand wherever a figure may be acted upon.
 */
export const CAUTIONS = {
  decisions:
    'These figures support the decisions of the district. They do not replace its rules, water law, water rights, metering, or the judgement of a licensed engineer.',
  estimates:
    'Requirements are computed from weather, crop, soil and canal data, not measured. Their accuracy follows from those data; check them against metered deliveries before acting on them.',
  orders:
    'An order is a request of the district to its own operators. Confirm that a canal is safe to run at the stated flow before opening a gate.',
  statement: 'This statement is computed. It is not a meter reading, and it settles no dispute about a water right.',
  frost:
    'Frost advice rests on a forecast energy balance. Water put on for protection can harm a crop, load it with ice or flood ground; do not start without knowing that the supply will last the night.',
  losses:
    'Canal losses follow the loss rule entered for each reach. Where losses have not been measured, flows at the headworks may be off by more than the differences between weeks.',
} as const;

export type Caution = keyof typeof CAUTIONS;

/** The cautions of a district report, in order. */
export const REPORT_CAUTIONS: readonly Caution[] = ['decisions', 'estimates', 'losses'];

/** Shown on every page of a district whose data are made up. */
export const INVENTED_CAUTION = 'Invented data: this district, its land, canals, crops and weather do not exist.';

export function cautionTexts(cautions: readonly Caution[]): string[] {
  return cautions.map((each) => CAUTIONS[each]);
}
