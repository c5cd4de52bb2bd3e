/** Five tally strokes as a small grove: four trunks with crowns, and the fifth as the slope they stand on. */
export function Mark({ className }: { className?: string }) {
	return (
		<svg viewBox="0 0 40 40" className={className} fill="none" aria-hidden="true" focusable="false">
			<g className="fill-bloom-3">
				<circle cx="7.2" cy="9.8" r="4.6" />
				<circle cx="15.6" cy="7.4" r="4.9" />
				<circle cx="24.4" cy="8.6" r="4.7" />
				<circle cx="32.6" cy="6.6" r="4.6" />
			</g>
			<g className="stroke-damson" strokeWidth="2.6" strokeLinecap="round">
				<path d="M7.6 8.6 L6.8 35" />
				<path d="M15.6 6.4 L15.9 34.4" />
				<path d="M24.5 7.4 L23.9 35.4" />
				<path d="M32.5 5.6 L32.9 34.6" />
				<path d="M2 31.4 L38 20.2" />
			</g>
		</svg>
	);
}
