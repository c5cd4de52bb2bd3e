/** Why a photo was taken away. */
export const photoReasons = ["consent_withdrawn", "shown_by_mistake"] as const;
export type PhotoReason = (typeof photoReasons)[number];
/** When a photo was taken away (an ISO moment), and why. */
export type PhotoTakenAway = { at: string; because: PhotoReason };
