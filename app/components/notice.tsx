import type { ReactNode } from "react";
import { classes } from "./classes.ts";

const tones = {
	info: "border-l-4 border-damson bg-damson-wash",
	attention: "border-l-4 border-quince bg-quince-wash",
	caution: "border-2 border-l-8 border-stop bg-stop-wash",
};

/** Something to know before going on; a caution where work can hurt. */
export function Notice({ tone, title, children }: { tone: keyof typeof tones; title?: string; children?: ReactNode }) {
	return (
		<div className={classes("my-5 max-w-prose px-5 py-4 break-inside-avoid", tones[tone])}>
			{title && <p className="font-bold">{title}</p>}
			{children && <div className={title ? "mt-1" : undefined}>{children}</div>}
		</div>
	);
}
