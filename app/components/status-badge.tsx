import type { ReactNode } from "react";
import { classes } from "./classes.ts";

const tones = {
	neutral: { look: "border-field text-quiet", sign: "○" },
	good: { look: "border-good text-good", sign: "●" },
	attention: { look: "border-quince bg-quince-wash text-attention", sign: "◆" },
	stop: { look: "border-stop bg-stop-wash text-stop", sign: "■" },
};

/** A state in one or two words; the sign's shape differs too, so that colour is never alone. */
export function StatusBadge({ tone, children }: { tone: keyof typeof tones; children: ReactNode }) {
	const { look, sign } = tones[tone];
	return (
		<span
			className={classes(
				"inline-flex items-center gap-1.5 w-max max-w-full rounded-plat border px-2 py-0.5 text-xs font-bold",
				look,
			)}
		>
			<span aria-hidden="true">{sign}</span>
			{children}
		</span>
	);
}
