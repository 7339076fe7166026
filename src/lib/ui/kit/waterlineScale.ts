/** Where value and limit lie on a scale of 0 (left) to 1, and whether the value is beyond the scale's end. */
export interface WaterlinePlaces {
  readonly value: number;
  readonly limit: number;
  readonly beyond: boolean;
}

/** Share of the scale that lies on the good side of the limit. */
const GOOD = 0.4;
/** A value that differs from its limit is drawn at least this far from it, on its own side. */
const APART = 0.012;

/**
 * The scale of one criterion. Its unit is the room on the good side of the limit: up to 1 for a correlation, down to
 * 0 for a distance. So a limit of 0.95 with a value of 0.98 is not lost in a scale from 0 to 1. Larger is to the
 * right. The drawing never puts a value on the other side of its limit.
 */
export function waterlinePlaces(
  value: number,
  limit: number,
  sense: 'at-least' | 'at-most'
): WaterlinePlaces {
  const atLeast = sense === 'at-least';
  const room = atLeast ? (limit > 0 && limit < 1 ? 1 - limit : Math.abs(limit)) : Math.abs(limit);
  const unit = (room === 0 ? 1 : room) / GOOD;
  const limitAt = atLeast ? 1 - GOOD : GOOD;
  const exact = limitAt + (value - limit) / unit;
  const apart =
    value > limit
      ? Math.max(exact, limitAt + APART)
      : value < limit
        ? Math.min(exact, limitAt - APART)
        : limitAt;
  const within = Math.min(1, Math.max(0, apart));
  return { value: Number.isNaN(within) ? limitAt : within, limit: limitAt, beyond: exact < 0 || exact > 1 };
}
