/** Hatching for withheld and dots for too rough, as SVG patterns; shape tells them apart, in grey print too. */
export function MapPatterns({ id }: { id: string }) {
	return (
		<defs>
			<pattern id={`${id}-withheld`} width="7" height="7" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
				<line x1="1" y1="0" x2="1" y2="7" className="map-hatch" />
			</pattern>
			<pattern id={`${id}-rough`} width="7" height="7" patternUnits="userSpaceOnUse">
				<circle cx="2" cy="2" r="1.2" className="map-dot" />
			</pattern>
		</defs>
	);
}
