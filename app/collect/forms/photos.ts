import type { Screen, Words } from "#app/collect/form.ts";

/** A screen for photos, which nobody has to take. @param text what they are to show. */
export function photoScreen(text: Words, asked: Pick<Screen, "condition" | "whenUnsure"> = {}): Screen {
	return {
		key: "photos",
		title: { en: "Photos", es: "Fotos" },
		perPlanting: false,
		...asked,
		questions: [
			{
				key: "photos",
				type: "photo",
				text,
				help: {
					en: "Up to five, without people. Where and when they were taken is removed. Only you and your state's associates see them.",
					es: "Hasta cinco, sin personas. Se les quita dónde y cuándo se tomaron. Solo las ven usted y los asesores de su estado.",
				},
				required: false,
				sensitive: false,
			},
		],
	};
}
