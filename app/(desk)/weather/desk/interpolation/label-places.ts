/** Where the labels of a small map stand, so that they hide neither one another nor the marks. */

interface Marked {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

/** Left edge and first baseline of a label, relative to its mark. */
export interface LabelPlace {
  readonly dx: number;
  readonly dy: number;
}

interface Box {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** Size of a label of two lines [px]. */
const [WIDE, HIGH] = [92, 28];
/** Height of the first line above its baseline [px]. */
const RISE = 10;
const GAP = 5;

/** A place for each label: right of its mark where that is free, else left, below or above; right again where nothing is. */
export function labelPlaces(marks: readonly Marked[], width: number): LabelPlace[] {
  const taken: Box[] = marks.map(({ x, y, radius }) => ({ left: x - radius, right: x + radius, top: y - radius, bottom: y + radius }));
  return marks.map((mark) => {
    const places = candidates(mark);
    const free = places.find((place) => {
      const box = boxOf(mark, place);
      return box.left >= 0 && box.right <= width && box.top >= 0 && !taken.some((other) => overlap(box, other));
    });
    const chosen = free ?? places[0];
    taken.push(boxOf(mark, chosen));
    return chosen;
  });
}

function candidates({ radius }: Marked): LabelPlace[] {
  return [
    { dx: radius + GAP, dy: -2 },
    { dx: -radius - GAP - WIDE, dy: -2 },
    { dx: -WIDE / 2, dy: radius + GAP + RISE },
    { dx: -WIDE / 2, dy: -radius - GAP - HIGH + RISE },
  ];
}

function boxOf({ x, y }: Marked, { dx, dy }: LabelPlace): Box {
  return { left: x + dx, right: x + dx + WIDE, top: y + dy - RISE, bottom: y + dy - RISE + HIGH };
}

function overlap(a: Box, b: Box): boolean {
  return a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;
}
