import { classes } from "./classes.ts";

/** Four strokes and a fifth across them, by hand: each leans a little otherwise. */
const strokes = [
	"M4 3 L3.4 21",
	"M9 2.6 L9.3 21.4",
	"M14.2 3.2 L13.6 20.8",
	"M19 2.4 L19.2 21.2",
	"M0.8 17.6 L22.4 6.2",
];

type TallyStrokesProps = { done: number; all?: number; size?: "small" | "large" };

/** Bundles of five, those to come drawn faint. Only a picture: the number must stand in words beside it. */
export function TallyStrokes({ done, all, size = "small" }: TallyStrokesProps) {
	const total = Math.max(done, all ?? done);
	const bundles = Array.from({ length: Math.ceil(total / 5) }, (_, index) => index * 5);
	return (
		<span aria-hidden="true" className="my-1 flex flex-wrap gap-x-2.5 gap-y-1.5">
			{bundles.map((start) => (
				<svg key={start} viewBox="0 0 24 24" className={size === "large" ? "size-9" : "size-6"} fill="none">
					{strokes.slice(0, total - start).map((path, index) => (
						<path
							key={path}
							d={path}
							strokeWidth="2.2"
							strokeLinecap="round"
							className={classes(start + index < done ? "stroke-damson" : "stroke-rule")}
						/>
					))}
				</svg>
			))}
		</span>
	);
}
