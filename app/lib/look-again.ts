import type { ShouldRevalidateFunctionArgs } from "react-router";

/**
 * A page's `shouldRevalidate` where somebody else may have been there first: a conflict shows what stands now. Left alone, the
 * router keeps the page as it was after any refusal, and what is sent from it meets the same conflict again.
 */
export function lookAgain({ actionStatus, defaultShouldRevalidate }: ShouldRevalidateFunctionArgs): boolean {
	return actionStatus === 409 || defaultShouldRevalidate;
}
