/** Whose survey an address of the grower's pages belongs to. @returns undefined for an address that is none of them. */
export function placeIn(pathname: string): { surveyId: string; operationId: string } | undefined {
	const [, surveyId, operationId] = /^\/answer\/([\w-]+)\/([\w-]+)(?:\/|$)/.exec(pathname) ?? [];
	return surveyId === undefined || operationId === undefined ? undefined : { surveyId, operationId };
}
