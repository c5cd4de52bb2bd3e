import { useEffect, useRef } from "react";
import { useLocation } from "react-router";

/** A page that changes in place may take away what was in focus: the focus is then on its content, not before its first link. */
export function useFocusKept(): void {
	const { key } = useLocation();
	const seen = useRef(key);
	useEffect(() => {
		if (seen.current === key) return;
		seen.current = key;
		if (document.activeElement === document.body) document.getElementById("content")?.focus({ preventScroll: true });
	}, [key]);
}
