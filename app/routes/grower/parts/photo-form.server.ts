import {
	type FileUpload,
	MaxFilesExceededError,
	MaxFileSizeExceededError,
	MaxTotalSizeExceededError,
	parseFormData,
} from "@remix-run/form-data-parser";
import { mostPhotoBytes, mostPhotos, type PhotoProblem, tooBig, tooMany } from "#app/collect/photo.ts";
import { letPass } from "#app/lib/read-at-most.server.ts";
import { refusal } from "#app/lib/refusal.ts";

/** Files of one form that are looked at, with room for those that are refused. */
const mostFiles = 4 * mostPhotos;
/** What is still let pass of a form that is refused, so that its page can say why. */
const mostBytes = 2 * mostFiles * mostPhotoBytes;

/**
 * Reads a form that brings photos. Each goes to `take` when it has come whole, so that one at a time is held; with one that
 * is too big the reading ends, and what follows is not held either.
 */
export async function readPhotoForm(
	request: Request,
	take: (file: Uint8Array) => Promise<PhotoProblem | undefined>,
): Promise<{ fields: FormData; problems: PhotoProblem[] }> {
	const problems: PhotoProblem[] = [];
	const each = async (file: FileUpload) => {
		// A box in which nothing was chosen is sent as an empty file without a name.
		if (file.size === 0 && file.name === "") return;
		const problem = await take(await file.bytes());
		if (problem) problems.push(problem);
	};
	const limits = { maxFiles: mostFiles, maxFileSize: mostPhotoBytes, maxTotalSize: mostBytes };
	try {
		return { fields: await parseFormData(request, limits, each), problems };
	} catch (error) {
		const problem = problemOf(error);
		if (!problem) throw error instanceof Error && /parse/i.test(error.name) ? refusal("form_not_understood") : error;
		await letPass(request, mostBytes);
		return { fields: new FormData(), problems: [...problems, problem] };
	}
}

function problemOf(error: unknown): PhotoProblem | undefined {
	if (error instanceof MaxFileSizeExceededError || error instanceof MaxTotalSizeExceededError) return tooBig;
	return error instanceof MaxFilesExceededError ? tooMany : undefined;
}
