import {
	brokenPhoto,
	mostPhotoBytes,
	type PhotoProblem,
	photoSide,
	problemOfBytes,
	telltaleBytes,
	tooBig,
} from "#app/collect/photo.ts";

/** A photo ready to be sent, with a small picture of it that a page can show. */
export type Shrunk = { bytes: ArrayBuffer; preview: string };

const previewSide = 160;

/** Draws a photo anew on the phone, no larger than it is kept: a tenth of the bytes to send, and nothing but its dots. */
export async function shrink(file: File): Promise<Shrunk | PhotoProblem> {
	if (file.size > mostPhotoBytes) return tooBig;
	// What the phone itself can show, it can draw, whatever its format.
	const bitmap = await createImageBitmap(file, { imageOrientation: "from-image" }).catch(() => null);
	if (!bitmap) {
		const first = new Uint8Array(await file.slice(0, telltaleBytes).arrayBuffer());
		return problemOfBytes(first) ?? brokenPhoto;
	}
	try {
		const blob = await new Promise<Blob | null>((resolve) =>
			drawn(bitmap, photoSide).toBlob(resolve, "image/jpeg", 0.8),
		);
		if (!blob) return brokenPhoto;
		return { bytes: await blob.arrayBuffer(), preview: drawn(bitmap, previewSide).toDataURL("image/jpeg", 0.6) };
	} finally {
		bitmap.close();
	}
}

function drawn(bitmap: ImageBitmap, side: number): HTMLCanvasElement {
	const scale = Math.min(1, side / Math.max(bitmap.width, bitmap.height));
	const canvas = document.createElement("canvas");
	canvas.width = Math.max(1, Math.round(bitmap.width * scale));
	canvas.height = Math.max(1, Math.round(bitmap.height * scale));
	const context = canvas.getContext("2d");
	if (context) {
		context.fillStyle = "#ffffff";
		context.fillRect(0, 0, canvas.width, canvas.height);
		context.drawImage(bitmap, 0, 0, canvas.width, canvas.height);
	}
	return canvas;
}
