export interface Rectangle {
  left: number;
  top: number;
  width: number;
  height: number;
}

/** A ring with the words that want a place beside it; pixels. */
export interface Labelled {
  x: number;
  y: number;
  radius: number;
  width: number;
  height: number;
}

/** Where the words stand relative to the ring's middle. */
export interface LabelPlace {
  left: number;
  top: number;
  align: 'left' | 'right' | 'center';
}

const gap = 5;
/** Room that the ticks of the neatline take. */
const edge = 8;
/** Share of a label that may lie on other words before it is left out. */
const mostCovered = 0.12;

function candidates({ radius, width, height }: Labelled): LabelPlace[] {
  const beside = radius + gap;
  const slant = radius * 0.72 + gap;
  return [
    { left: beside, top: -height / 2, align: 'left' },
    { left: -beside - width, top: -height / 2, align: 'right' },
    { left: slant, top: slant - 4, align: 'left' },
    { left: -slant - width, top: slant - 4, align: 'right' },
    { left: slant, top: -slant - height + 4, align: 'left' },
    { left: -slant - width, top: -slant - height + 4, align: 'right' },
    { left: -width / 2, top: beside, align: 'center' },
    { left: -width / 2, top: -beside - height, align: 'center' },
  ];
}

const overlap = (a: Rectangle, b: Rectangle): number =>
  Math.max(0, Math.min(a.left + a.width, b.left + b.width) - Math.max(a.left, b.left)) *
  Math.max(0, Math.min(a.top + a.height, b.top + b.height) - Math.max(a.top, b.top));

const holds = (box: Rectangle, [x, y]: [number, number]): boolean =>
  x > box.left - 2 && x < box.left + box.width + 2 && y > box.top && y < box.top + box.height;

/**
 * A place for each label, greedily, the largest ring first: off the other rings and words, off the
 * lines (`lines` are points along them), inside the frame. One place per entry, in their order; null where
 * words would lie on words.
 */
export function placeLabels(
  entries: Labelled[],
  lines: [number, number][],
  frame: { width: number; height: number },
  /** What else stands on the sheet, like its scale. */
  furniture: Rectangle[] = [],
): (LabelPlace | null)[] {
  const rings = entries.map(({ x, y, radius }) => ({
    left: x - radius,
    top: y - radius,
    width: radius * 2,
    height: radius * 2,
  }));
  const taken: Rectangle[] = [...furniture];
  const places = new Map<number, LabelPlace>();
  const order = entries.map((_, index) => index);
  order.sort((a, b) => (entries[b]?.radius ?? 0) - (entries[a]?.radius ?? 0));
  for (const index of order) {
    const entry = entries[index];
    if (!entry) continue;
    const best = candidates(entry)
      .map((place, rank) => {
        const box = {
          left: entry.x + place.left,
          top: entry.y + place.top,
          width: entry.width,
          height: entry.height,
        };
        const covered = taken.reduce((sum, other) => sum + overlap(box, other), 0);
        return {
          place,
          box,
          covered,
          cost: rank * 3 + costOf(box, rings, taken, lines, frame),
        };
      })
      .sort((a, b) => a.cost - b.cost)[0];
    if (!best || best.covered > best.box.width * best.box.height * mostCovered) continue;
    places.set(index, best.place);
    taken.push(best.box);
  }
  return entries.map((_, index) => places.get(index) ?? null);
}

function costOf(
  box: Rectangle,
  rings: Rectangle[],
  taken: Rectangle[],
  lines: [number, number][],
  frame: { width: number; height: number },
): number {
  const onOthers = [...rings, ...taken].reduce((sum, other) => sum + overlap(box, other), 0);
  const onLines = lines.filter((point) => holds(box, point)).length;
  const inside = overlap(box, {
    left: edge,
    top: edge,
    width: frame.width - 2 * edge,
    height: frame.height - 2 * edge,
  });
  return onOthers * 2 + onLines * 14 + (box.width * box.height - inside) * 3;
}
