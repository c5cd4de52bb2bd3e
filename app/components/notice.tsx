import { type ReactNode, useEffect, useRef } from "react";
import { classes } from "./classes.ts";

const tones = {
	info: "border-l-4 border-damson bg-damson-wash",
	attention: "border-l-4 border-quince bg-quince-wash",
	caution: "border-2 border-l-8 border-stop bg-stop-wash",
};

type NoticeProps = { tone: keyof typeof tones; title?: string; children?: ReactNode };

/** Something to know before going on; a caution where work can hurt. */
export function Notice({ tone, title, children }: NoticeProps) {
	return (
		<div className={classes("my-5 max-w-prose px-5 py-4 break-inside-avoid", tones[tone])}>
			{title && <p className="font-bold">{title}</p>}
			{children && <div className={title ? "mt-1" : undefined}>{children}</div>}
		</div>
	);
}

/**
 * Why what was sent was not done. Takes the focus each time: it stands on top of the page, and the button that was pressed
 * may be far below.
 */
export function NotDone({ answer, ...notice }: NoticeProps & { answer: unknown }) {
	const box = useRef<HTMLDivElement>(null);
	useEffect(() => {
		if (answer) box.current?.focus();
	}, [answer]);
	return (
		<div ref={box} tabIndex={-1} role="alert">
			<Notice {...notice} />
		</div>
	);
}
