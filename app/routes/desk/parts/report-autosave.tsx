import { type RefObject, useEffect, useRef, useState } from "react";
import { useTranslation } from "react-i18next";
import { useFetcher } from "react-router";
import { useHeldPost } from "#app/components/use-held-post.ts";
import { useFormat } from "#app/i18n/use-format.ts";

/** What the page's action answers to what was saved by itself. */
type Answer = { autosaved?: boolean; edit?: number; conflict?: number | null; problems?: unknown[] };

type AutosaveProps = {
	form: RefObject<HTMLFormElement | null>;
	/** Is told the count of edits that the next save begins from. */
	onSaved: (edit: number) => void;
};

/** Writing pauses this long before it is saved. */
const pauseMs = 4_000;

/**
 * Saves the form a moment after its writer pauses, with the count of edits that it began from: what somebody else saved
 * meanwhile is never overwritten. Without scripts the button saves, and this is not there.
 */
export function Autosave({ form, onSaved }: AutosaveProps) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const fetcher = useFetcher<Answer>();
	const [savedAt, setSavedAt] = useState<Date | null>(null);
	const busy = useRef(false);
	const pressed = useRef<HTMLElement | null>(null);
	const held = useHeldPost();
	busy.current = fetcher.state !== "idle" && !held;
	const failed = held || fetcher.data?.conflict || (fetcher.data?.problems?.length ?? 0) > 0;

	useEffect(() => {
		const element = form.current;
		if (!element) return;
		let timer: ReturnType<typeof setTimeout> | undefined;
		const save = () => {
			if (busy.current) return later();
			const sent = new FormData(element);
			sent.set("intent", "autosave");
			void fetcher.submit(sent, { method: "post" });
		};
		const later = () => {
			clearTimeout(timer);
			timer = setTimeout(save, pauseMs);
		};
		// A button pressed while a save is on its way waits for the count that the save gives back.
		const hold = (event: SubmitEvent) => {
			clearTimeout(timer);
			if (!busy.current) return;
			event.preventDefault();
			event.stopImmediatePropagation();
			pressed.current = event.submitter;
		};
		element.addEventListener("input", later);
		element.addEventListener("submit", hold, true);
		return () => {
			clearTimeout(timer);
			element.removeEventListener("input", later);
			element.removeEventListener("submit", hold, true);
		};
		// The fetcher's functions stay the same for as long as the form is there.
		// oxlint-disable-next-line react-hooks/exhaustive-deps
	}, [form]);

	useEffect(() => {
		if (!held) return;
		// Its answer never comes. A button that waited for it is pressed, and says what holds it.
		fetcher.reset();
		pressAfter(form, pressed);
		// oxlint-disable-next-line react-hooks/exhaustive-deps
	}, [held]);

	useEffect(() => {
		const { data } = fetcher;
		if (fetcher.state !== "idle" || !data?.autosaved) return;
		const count = form.current?.elements.namedItem("edit");
		if (!data.conflict && !data.problems?.length && data.edit && count instanceof HTMLInputElement) {
			// At once, for a button that is pressed now, and for when the form is drawn again.
			count.value = String(data.edit);
			onSaved(data.edit);
			setSavedAt(new Date());
		}
		pressAfter(form, pressed);
	}, [fetcher, form, onSaved]);

	return (
		<output className="self-center text-sm text-quiet">
			{failed ? t("autosave.failed") : savedAt ? t("autosave.saved", { moment: format.moment(savedAt) }) : ""}
		</output>
	);
}

/** Presses the button that was pressed while a save was on its way. */
function pressAfter(form: RefObject<HTMLFormElement | null>, pressed: RefObject<HTMLElement | null>): void {
	const button = pressed.current;
	pressed.current = null;
	if (button) form.current?.requestSubmit(button);
}
