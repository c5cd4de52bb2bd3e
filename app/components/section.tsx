import { type ReactNode, useId } from "react";
import { classes } from "./classes.ts";

type SectionProps = { title: string; children?: ReactNode; level?: 2 | 3 | 4; actions?: ReactNode; id?: string };

const sizes = { 2: "text-xl", 3: "text-lg", 4: "text-base" };

/** A part of a page under a ruled heading. */
export function Section({ title, children, level = 2, actions, id }: SectionProps) {
	const Heading = `h${level}` as const;
	const headingId = useId();
	return (
		<section id={id} aria-labelledby={headingId} className={level === 2 ? "mt-10" : "mt-6"}>
			<div
				className={classes(
					"mb-4 flex flex-wrap items-end justify-between gap-x-6 gap-y-2 break-after-avoid",
					level === 2 && "border-t border-line pt-3",
				)}
			>
				<Heading id={headingId} className={sizes[level]}>
					{title}
				</Heading>
				{actions && <div className="no-print flex flex-wrap gap-3">{actions}</div>}
			</div>
			{children}
		</section>
	);
}
