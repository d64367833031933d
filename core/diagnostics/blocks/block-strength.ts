/** Wiedenmann et al. 2002: weak under 2.0, strong over 4.3. */
const MODERATE = 2.0;
const STRONG = 4.3;

/**
 * Blocking intensity, Wiedenmann et al. 2002 (J. Climate 15, 3459): BI = 100 [MZ/RC − 1], RC = ½ [(Zu + MZ)/2 + (Zd + MZ)/2].
 *
 * @param highest    MZ, the highest height in the block, gpm.
 * @param upstream   Zu, the lowest upstream.
 * @param downstream Zd, the lowest downstream.
 */
export function blockingIntensity(highest: number, upstream: number, downstream: number): number {
  const contour = ((upstream + highest) / 2 + (downstream + highest) / 2) / 2;
  return 100 * (highest / contour - 1);
}

/** 1 weak, 2 moderate, 3 strong; NaN for a strength that is missing. */
export function strengthClass(strength: number): number {
  if (Number.isNaN(strength)) return Number.NaN;
  return strength < MODERATE ? 1 : strength > STRONG ? 3 : 2;
}
