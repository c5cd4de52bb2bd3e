import {
	type FileUpload,
	MaxFileSizeExceededError,
	MaxTotalSizeExceededError,
	parseFormData,
} from "@remix-run/form-data-parser";
import { mostFileBytes } from "#app/directory/import/cells.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { letPass } from "#app/lib/read-at-most.server.ts";
import { refusal } from "#app/lib/refusal.ts";

const tooLarge: Problem = { field: "file", code: "file_too_large_limit", detail: { max: mostFileBytes / 1024 / 1024 } };

/** The one file that a form brings, held whole, or what to mend. What is too large is let pass so that the page can say so. */
export async function readUploadedFile(
	request: Request,
): Promise<{ fileName: string; file: Uint8Array } | { problems: Problem[] }> {
	let taken: { fileName: string; file: Uint8Array } | undefined;
	const each = async (upload: FileUpload) => {
		const file = await upload.bytes();
		if (file.length > 0) taken = { fileName: upload.name, file };
	};
	try {
		await parseFormData(request, { maxFiles: 1, maxFileSize: mostFileBytes }, each);
	} catch (error) {
		if (error instanceof MaxFileSizeExceededError || error instanceof MaxTotalSizeExceededError) {
			await letPass(request, 20 * mostFileBytes);
			return { problems: [tooLarge] };
		}
		throw error instanceof Error && /parse|MaxFiles/i.test(error.name) ? refusal("form_not_understood") : error;
	}
	return taken ?? { problems: [{ field: "file", code: "file_missing" }] };
}
