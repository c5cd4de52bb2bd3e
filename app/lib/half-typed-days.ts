/** What no box of a day or time can hold, so that a form that sends it is told that the day is not one. */
const noDay = "--:--";

/**
 * A box of a day or time that holds what is none, such as February 30, sends nothing, as if it were empty: where it may be
 * empty the day would be lost without a word. It is made to say that something stands in it.
 */
export function tellHalfTypedDays(page: Document): void {
	page.addEventListener("formdata", ({ target, formData }) => {
		for (const box of (target as HTMLFormElement).elements)
			if (box instanceof HTMLInputElement && box.name && box.validity.badInput) formData.set(box.name, noDay);
	});
}
