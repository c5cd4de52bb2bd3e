import { isPicture, type Picture, readPicture } from "#app/collect/photo-picture.server.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";
import { PhotoConsent } from "#app/publish/drafting/photo.schema.ts";
import { readPhotoForm } from "#app/routes/grower/parts/photo-form.server.ts";

type Sent =
	{ ok: true; photo: Picture; consent: PhotoConsent } | { ok: false; values: FormValues; problems: Problem[] };

/** Reads a photo and the consent for it. The photo is made anew from its dots, as growers' are: nothing else of the file stays. */
export async function readReportPhoto(request: Request): Promise<Sent> {
	const photos: Picture[] = [];
	const { fields, problems: ofFile } = await readPhotoForm(request, async (file) => {
		if (file.length === 0) return { code: "empty" };
		const read = await readPicture(file);
		if (!isPicture(read)) return read;
		photos.push(read);
		return undefined;
	});
	const form = parseForm(PhotoConsent, fields);
	const photo = photos[0];
	const missing = photo || ofFile.length > 0 ? [] : [{ code: "empty" }];
	const problems = [
		...[...ofFile, ...missing].slice(0, 1).map((problem) => ({ field: "photo", ...problem })),
		...(form.ok ? [] : form.problems),
	];
	if (!form.ok || !photo || problems.length > 0) return { ok: false, values: form.values, problems };
	return { ok: true, photo, consent: form.value };
}
