export const sizeClasses = ["small", "medium", "large"] as const;
export type SizeClass = (typeof sizeClasses)[number];

/** From how many bearing trees and bushes on an operation is no longer of the class before. */
export const sizeClassFrom = { medium: 100, large: 1000 };

/**
 * The size class of an operation in a survey's frame, by bearing trees and bushes of the survey's crops together: small
 * below 100, medium below 1,000, large from there. The cuts are the network's own: common practice, no source.
 */
export function sizeClassOf(bearingTrees: number): SizeClass {
	if (bearingTrees < sizeClassFrom.medium) return "small";
	return bearingTrees < sizeClassFrom.large ? "medium" : "large";
}

/** The stratum of an operation, state by size class: "IA-small". */
export function stratumKeyOf(postal: string, sizeClass: SizeClass): string {
	return `${postal}-${sizeClass}`;
}
