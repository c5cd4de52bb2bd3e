export const sizeClasses = ["small", "medium", "large"] as const;
export type SizeClass = (typeof sizeClasses)[number];

/**
 * The size class of an operation in a survey's frame, by bearing trees and bushes of the survey's crops together: small
 * below 100, medium below 1,000, large from there. The cuts are the network's own: common practice, no source.
 */
export function sizeClassOf(bearingTrees: number): SizeClass {
	if (bearingTrees < 100) return "small";
	return bearingTrees < 1000 ? "medium" : "large";
}

/** The stratum of an operation, state by size class: "IA-small". */
export function stratumKeyOf(postal: string, sizeClass: SizeClass): string {
	return `${postal}-${sizeClass}`;
}
