import { refusal } from "#app/lib/refusal.ts";

export function loader() {
	throw refusal("page_not_found");
}

export function action() {
	throw refusal("page_not_found");
}

/** Never drawn: the loader always refuses, and the layout shows why. */
export default function NotFound() {
	return null;
}
