import { href } from "react-router";

/** Where a grower's pages show a photo of the survey that is being answered. */
export function photoAddress(place: { surveyId: string; operationId: string }): (photoId: string) => string {
	return (photoId) => href("/answer/:surveyId/:operationId/photos/:photoId", { ...place, photoId });
}
