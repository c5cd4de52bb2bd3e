import type { PhotoProblem } from "#app/collect/photo.ts";
import type { Sending } from "../send.ts";
import type { PhotoWords } from "./photo-words.ts";

/** A photo that was added on this page, or that the phone still holds. */
export type PhotoShown = {
	photoId: string;
	bytes: ArrayBuffer;
	preview: string;
	state: "waiting" | "sent" | "refused" | "removed";
	/** Which part of it is gone, while it is being sent. */
	part: number | null;
	problem: PhotoProblem | null;
	/** Whether it lasts when the page is closed. */
	lasting: boolean;
};
export type PhotoRow = { element: HTMLLIElement; show: (photo: PhotoShown, sending: Sending | undefined) => void };

/** One photo of the list with what has become of it. The button takes it away, and then takes that back. */
export function makeRow(preview: string, number: number, words: PhotoWords, onPress: () => void): PhotoRow {
	const element = Object.assign(document.createElement("li"), { className: "flex items-start gap-4 py-3" });
	const image = Object.assign(document.createElement("img"), { src: preview, alt: "" });
	image.className = "size-28 border border-line object-cover";
	const beside = document.createElement("div");
	const word = document.createElement("p");
	const progress = Object.assign(document.createElement("progress"), { max: 1, className: "block w-40" });
	progress.setAttribute("aria-label", words.sending);
	const button = Object.assign(document.createElement("button"), { type: "button" });
	button.className = "min-h-11 text-damson underline underline-offset-4";
	button.addEventListener("click", onPress);
	beside.append(word, progress, button);
	element.append(image, beside);
	return {
		element,
		show: (photo, sending) => {
			const text = wordFor(photo, sending, words);
			if (word.textContent !== text) word.textContent = text;
			word.className = photo.state === "refused" ? "font-bold text-stop" : "";
			progress.hidden = photo.state !== "waiting" || photo.part === null;
			progress.value = photo.part ?? 0;
			image.hidden = photo.state === "removed";
			button.textContent = photo.state === "removed" ? words.undo : words.remove.replace("{{number}}", String(number));
		},
	};
}

function wordFor(
	{ state, part, problem, lasting }: PhotoShown,
	sending: Sending | undefined,
	words: PhotoWords,
): string {
	if (state === "removed") return words.removed;
	if (state === "sent") return words.sent;
	if (state === "refused") return words.problems[problem?.code ?? ""] ?? "";
	if (sending === "closed") return words.closed;
	if (part !== null) return words.sending;
	if (!lasting) return words.open;
	return sending === "session_over" ? words.over : words.waiting;
}
