/**
 * Which of two seasons' quantities looks as if it was given in a larger unit, bushels for pounds, say: this season where
 * the ratio of this to last is about 1 / unitSize, last season where it is about unitSize.
 *
 * In a year when everyone lost half, a plain ratio misses slips and sees others that are none: divide it by the crop's
 * median ratio first. Tenfold and halved values are no slips of unit.
 * @param ratio this season over last, better over the crop's median ratio too; above 0.
 * @param unitSize how many of the expected unit one of the larger holds: pounds in a bushel of the crop. Above 1.
 * @param tolerance how far from the unit's size it may be: a fifth less or a quarter more.
 * @throws {RangeError} when the ratio is not above 0 or the unit not above 1.
 * Source: formula 20 of the reference set, our own.
 */
export function unitSlip(
	ratio: number,
	unitSize: number,
	tolerance: { least: number; most: number } = { least: 0.8, most: 1.25 },
): "now" | "last" | null {
	if (!(ratio > 0 && Number.isFinite(ratio))) throw new RangeError(`${ratio} is not the ratio of two quantities`);
	if (!(unitSize > 1)) throw new RangeError(`a larger unit cannot hold ${unitSize}`);
	const isNear = (value: number) => value >= tolerance.least && value <= tolerance.most;
	if (isNear(ratio * unitSize)) return "now";
	return isNear(ratio / unitSize) ? "last" : null;
}
