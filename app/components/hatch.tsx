/** The hatching of what is withheld, for a drawing: put inside `<defs>` and fill with `url(#id)`. */
export function HatchPattern({ id }: { id: string }) {
	return (
		<pattern id={id} width="5" height="5" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
			<rect width="5" height="5" className="fill-paper" />
			<path d="M0 0 V5" className="stroke-hatch" strokeWidth="1.6" />
		</pattern>
	);
}
