/**
 * A sent form without the character of code 0, in texts as in names: nobody types it, and the database can keep no text that
 * has it. Files stay as they are.
 */
export function readableForm(form: FormData): FormData {
	const readable = new FormData();
	for (const [name, value] of form) {
		if (typeof value === "string") readable.append(name.replaceAll("\0", ""), value.replaceAll("\0", ""));
		else readable.append(name, value);
	}
	return readable;
}
