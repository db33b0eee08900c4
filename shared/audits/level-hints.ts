/** What a mismatch of levels suggests, in words; empty where nothing simple fits. Levels ascending, in the unit of the couplings. */
export function differenceHint(
  left: readonly number[],
  right: readonly number[],
  leftDimension: number,
  rightDimension: number,
): string {
  const shared = Math.min(left.length, right.length);
  const scale = Math.max(1, ...left.map(Math.abs), ...right.map(Math.abs));
  const near = (a: number, b: number): boolean => Math.abs(a - b) < 1e-8 * scale;
  const pairs = Array.from({ length: shared }, (_, k): [number, number] => [left[k] ?? 0, right[k] ?? 0]);
  const [a0, b0] = pairs[0] ?? [0, 0];
  const last = pairs.at(-1) ?? [0, 0];
  if (shared > 1 && !near(a0, b0) && pairs.every(([a, b]) => near(a - b, a0 - b0)))
    return `all levels differ by ${(a0 - b0).toFixed(9)}: a constant is missing`;
  const spread = last[1] - b0;
  const ratio = spread === 0 ? NaN : (last[0] - a0) / spread;
  if (
    shared > 2 &&
    Number.isFinite(ratio) &&
    Math.abs(ratio) > 1e-6 &&
    !near(ratio, 1) &&
    pairs.every(([a, b]) => near(a - a0, ratio * (b - b0)))
  )
    return `the levels are in the ratio ${ratio.toFixed(6)}: a factor is missing`;
  const whole = left.length === leftDimension && right.length === rightDimension;
  if (whole && shared === left.length && pairs.every(([a], k) => near(a, -(right[shared - 1 - k] ?? 0))))
    return 'the levels are one another’s negatives: an overall sign is missing';
  if (leftDimension !== rightDimension) {
    const [small, large, name] = leftDimension < rightDimension ? [left, right, 'right'] : [right, left, 'left'];
    if (contained(small, large, near))
      return `every level of the other side occurs on the ${name}, which has more states (${String(leftDimension)} and ${String(rightDimension)}): a sector is missing on the ${name}`;
    return `the numbers of states differ (${String(leftDimension)} and ${String(rightDimension)}): check the sectors`;
  }
  return '';
}

/** Whether the levels of `small` that lie within the range of `large` occur there, each as often at least. */
function contained(
  small: readonly number[],
  large: readonly number[],
  near: (a: number, b: number) => boolean,
): boolean {
  const top = large.at(-1) ?? -Infinity;
  let from = 0;
  for (const level of small) {
    if (level > top && !near(level, top)) return true;
    while (from < large.length && !near(large[from] ?? 0, level) && (large[from] ?? 0) < level) from++;
    if (from >= large.length || !near(large[from] ?? 0, level)) return false;
    from++;
  }
  return true;
}
