import tokens from "#app/styles/tokens.css?raw";
import mapStyles from "./map.css?raw";

/** The page's light colours by name: those that print has too. */
const colors = Object.fromEntries(
	[...(tokens.split("@media screen")[0] ?? "").matchAll(/--color-([\w-]+): (#[0-9a-f]{6});/g)].map(
		([, name = "", color = ""]) => [name, color],
	),
);
export const colorOf = (name: string): string => {
	const color = colors[name];
	if (!color) throw new Error(`the page has no colour ${name}`);
	return color;
};

const hues = ["loss", "bloom", "pests", "cold", "yield", "normal"];

/**
 * The map's own rules for a picture that stands by itself: the page's style sheet is not there, and who draws it may know
 * neither variables nor layers.
 */
export const pictureStyle: string = [
	`text{font-family:"Noto Sans",sans-serif;fill:${colorOf("ink")}}`,
	`.quiet{fill:${colorOf("quiet")}}`,
	...[...mapStyles.matchAll(/^\t(\.map-[\w-]+) \{([^}]*)\}/gm)].map(([, name, rules = ""]) => {
		const plain = rules.replace(/var\(--color-([\w-]+)\)/g, (_, color: string) => colorOf(color));
		return `${name}{${plain.replace(/\s+/g, " ").trim()}}`;
	}),
	...hues.flatMap((hue) => [1, 2, 3, 4, 5, 6].map((step) => `.fill-${hue}-${step}{fill:${colorOf(`${hue}-${step}`)}}`)),
].join("");
