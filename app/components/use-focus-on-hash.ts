import { useEffect } from "react";
import { useLocation } from "react-router";

const inFocus = "a, button, input:not([type=hidden]), select, textarea, [tabindex]";

/** What was added or moved comes back with its address; the focus goes there, or to the first thing in it that can have it. */
export function useFocusOnHash(): void {
	const location = useLocation();
	useEffect(() => {
		const place = document.getElementById(location.hash.slice(1));
		const target = place?.matches(inFocus) ? place : place?.querySelector<HTMLElement>(inFocus);
		target?.focus();
	}, [location]);
}
