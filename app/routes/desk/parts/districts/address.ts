import { href } from "react-router";

/** The page of a state's districts, judged by a survey's answers, with the proposal in its boxes or not. */
export function addressOf({
	state,
	survey,
	propose,
}: {
	state: string;
	survey?: string | null;
	propose?: boolean;
}): string {
	const query = new URLSearchParams({ state, ...(survey && { survey }), ...(propose && { propose: "1" }) });
	return `${href("/desk/districts")}?${query}`;
}
