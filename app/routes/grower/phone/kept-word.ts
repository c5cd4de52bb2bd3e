import type { TypedStep } from "#app/collect/outbox.ts";
import type { PageData } from "./page-data.ts";
import type { Sending } from "./send.ts";

export type KeptState = {
	/** What the phone holds of the screen; undefined when the server has it all. */
	step: TypedStep | undefined;
	/** How the last sending ended; undefined while one is under way. */
	sending: Sending | undefined;
	/** Whether what is typed lasts when the page is closed. */
	lasting: boolean;
	/** Whether another page of this phone holds the screen. */
	twice: boolean;
};

/** Says beside the button, in words, what has become of what was typed. A reader is told when it changes. */
export function sayKept(page: PageData, state: KeptState): void {
	const place = document.getElementById("kept-word");
	if (!place) return;
	const text = wordFor(page, state);
	const offersBoth = state.twice || state.step?.state === "changed_elsewhere";
	// Said again only when it changes, so that a screen reader does not repeat itself at every letter.
	if (place.dataset.said === text) return;
	place.dataset.said = text;
	// A button that is there already stays: replaced under a finger, it would not be pressed.
	const shown = place.querySelector("button");
	if (offersBoth && shown) {
		shown.previousSibling?.replaceWith(text);
		return;
	}
	place.textContent = text;
	if (offersBoth) {
		const button = Object.assign(document.createElement("button"), { type: "submit", textContent: page.words.seeBoth });
		button.className = "ml-2 min-h-11 text-damson underline underline-offset-4";
		place.append(button);
	}
}

function wordFor({ words, labels }: PageData, { step, sending, lasting, twice }: KeptState): string {
	if (sending === "closed") return words.closed;
	if (twice) return words.twice;
	switch (step?.state) {
		case "changed_elsewhere":
			return words.elsewhere;
		case "unread":
			return words.unread.replace("{{names}}", step.unread.map((key) => labels[key] ?? key).join(", "));
		case "refused":
			return lasting ? words.phone : words.lost;
		case "waiting":
			if (sending === undefined || sending === "sent" || sending === "late") return words.keeping;
			if (!lasting) return words.lost;
			return sending === "session_over" ? words.over : words.phone;
		default:
			if (sending === "late") return words.afterClosing;
			return lasting ? words.kept : `${words.kept} ${words.noRoom}`;
	}
}
