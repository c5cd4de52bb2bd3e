import { z } from "zod";

export const Trouble = z.object({
	/** ok: takes all; refuse: no connection; defer: "try later" (451); bounce: no such mailbox (550). */
	mode: z.enum(["ok", "refuse", "defer", "bounce"]),
	/** How many times, after which all is well again; without it until changed. */
	count: z.int().min(1).max(1_000_000).optional(),
});
export type Trouble = z.infer<typeof Trouble>;

type Answer = Error & { responseCode: number };
const answers = {
	refuse: [421, "Service not available, closing"],
	defer: [451, "Try again later"],
	bounce: [550, "No such mailbox here"],
} as const;

/** Trouble that tests ask for, to see what the sender does about it. */
export class TroubleMaker {
	#trouble: Trouble = { mode: "ok" };

	get present(): Trouble {
		return this.#trouble;
	}

	set(trouble: Trouble): void {
		this.#trouble = trouble;
	}

	/** The error to answer with at this step of the conversation, if it is time for one. */
	next(mode: "refuse" | "defer" | "bounce"): Answer | undefined {
		if (this.#trouble.mode !== mode) return undefined;
		if (this.#trouble.count !== undefined) {
			const count = this.#trouble.count - 1;
			this.#trouble = count > 0 ? { mode, count } : { mode: "ok" };
		}
		const [responseCode, words] = answers[mode];
		return Object.assign(new Error(words), { responseCode });
	}
}
