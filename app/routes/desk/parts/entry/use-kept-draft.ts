import { useCallback, useEffect, useRef } from "react";
import { useFetcher } from "react-router";

/** How long nobody types before what was typed is kept, in milliseconds. */
const pause = 1_500;

/**
 * Keeps a form as a draft while it is typed, and at once when the page goes out of sight: a call that breaks off or a
 * browser that is closed loses nothing. Without scripts a button does it.
 */
export function useKeptDraft() {
	const form = useRef<HTMLFormElement>(null);
	const fetcher = useFetcher<{ kept: true }>();
	const { submit } = fetcher;
	const keep = useCallback(() => {
		if (!form.current) return;
		const typed = new FormData(form.current);
		typed.set("step", "keep");
		void submit(typed, { method: "post" });
	}, [submit]);
	useEffect(() => {
		const element = form.current;
		if (!element) return;
		let timer: ReturnType<typeof setTimeout> | undefined;
		const later = () => {
			clearTimeout(timer);
			timer = setTimeout(() => {
				timer = undefined;
				keep();
			}, pause);
		};
		const atOnce = () => {
			if (timer === undefined || document.visibilityState !== "hidden") return;
			clearTimeout(timer);
			timer = undefined;
			keep();
		};
		const end = () => {
			clearTimeout(timer);
			timer = undefined;
		};
		element.addEventListener("input", later);
		element.addEventListener("submit", end);
		document.addEventListener("visibilitychange", atOnce);
		return () => {
			end();
			element.removeEventListener("input", later);
			element.removeEventListener("submit", end);
			document.removeEventListener("visibilitychange", atOnce);
		};
	}, [keep]);
	return { form, kept: fetcher.state === "idle" && fetcher.data?.kept === true };
}
