/** What photos may be, for the server and for phones, which look before anything is sent. */
export const mostPhotos = 5;
const mostMegabytes = 15;
export const mostPhotoBytes = mostMegabytes * 1024 * 1024;

/** Longer side of what is kept: enough to tell a scab from a bruise, little enough for one bar of signal. */
export const photoSide = 1600;

/** Why a photo is not taken, as a problem of its field. */
export type PhotoProblem = { code: string; detail?: Record<string, number> };

export const tooBig: PhotoProblem = { code: "photo_too_big_limit", detail: { max: mostMegabytes } };
export const tooMany: PhotoProblem = { code: "photo_too_many_limit", detail: { max: mostPhotos } };
export const noPhoto: PhotoProblem = { code: "photo_not_a_photo" };
export const photoOfPhone: PhotoProblem = { code: "photo_heic" };
export const brokenPhoto: PhotoProblem = { code: "photo_broken" };
export const tooManyDots: PhotoProblem = { code: "photo_too_many_dots" };
/** It could not be kept for a reason that passes, such as a full disk. */
export const notKept: PhotoProblem = { code: "photo_not_kept" };

/** As many bytes as tell what a file is. */
export const telltaleBytes = 32;

/**
 * What keeps a file from being a photo that can be kept, by its own first bytes: names and declared types are only claims.
 * @returns undefined for a JPEG, PNG or WebP picture.
 */
export function problemOfBytes(first: Uint8Array): PhotoProblem | undefined {
	const text = (from: number, to: number) => String.fromCharCode(...first.subarray(from, to));
	if (first[0] === 0xff && first[1] === 0xd8 && first[2] === 0xff) return undefined;
	if (text(0, 8) === "\x89PNG\r\n\x1a\n") return undefined;
	if (text(0, 4) === "RIFF" && text(8, 12) === "WEBP") return undefined;
	const isHeic = text(4, 8) === "ftyp" && /^(hei[cmsx]|hev[cmsx]|mif1|msf1)$/.test(text(8, 12));
	return isHeic ? photoOfPhone : noPhoto;
}
