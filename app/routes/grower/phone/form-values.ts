import type { StepValues } from "#app/collect/posted.ts";

/** What the boxes of a screen hold. Names that begin with an underscore tell of the change itself and are no boxes. */
export function valuesIn(form: HTMLFormElement, submitter: HTMLElement | null = null): StepValues {
	return valuesOf(new FormData(form, submitter));
}

/** What the boxes held when the screen was drawn, whatever has been typed since. */
export function valuesDrawn(form: HTMLFormElement): StepValues {
	const drawn = form.cloneNode(true) as HTMLFormElement;
	drawn.reset();
	return valuesIn(drawn);
}

export function valuesOf(posted: FormData): StepValues {
	const values: StepValues = {};
	for (const [name, value] of posted) {
		if (name.startsWith("_") || typeof value !== "string") continue;
		const before = values[name];
		values[name] = before === undefined ? value : [before, value].flat();
	}
	return values;
}

/** Puts values back into the boxes of a screen. */
export function fill(form: HTMLFormElement, values: StepValues): void {
	for (const box of form.elements) {
		if (!isBox(box) || box.name === "" || box.name.startsWith("_") || box.type === "file") continue;
		const texts = [values[box.name] ?? []].flat();
		if (box instanceof HTMLInputElement && (box.type === "checkbox" || box.type === "radio"))
			box.checked = texts.includes(box.value);
		else if (texts[0] !== undefined) box.value = texts[0];
	}
}

type Box = HTMLInputElement | HTMLSelectElement | HTMLTextAreaElement;

function isBox(element: Element): element is Box {
	return (
		element instanceof HTMLInputElement ||
		element instanceof HTMLSelectElement ||
		element instanceof HTMLTextAreaElement
	);
}

/** Sets a hidden field that tells of the change, as often as there are values. */
export function setHidden(form: HTMLFormElement, name: string, values: string[]): void {
	for (const old of form.querySelectorAll(`input[type=hidden][name="${name}"]`)) old.remove();
	for (const value of values) {
		const input = Object.assign(document.createElement("input"), { type: "hidden", name, value });
		form.append(input);
	}
}
