/** What the script of a photo screen says; the page brings the words in its language. */
export const photoWordKeys = [
	"making",
	"sending",
	"waiting",
	"open",
	"over",
	"closed",
	"sent",
	"remove",
	"removed",
	"undo",
	"noSignal",
	"lost",
] as const;
export type PhotoWords = Record<(typeof photoWordKeys)[number], string> & {
	/** Why a photo is not taken, by code. */
	problems: Record<string, string>;
};

/** Everything that a photo can be told not to be taken for. */
export const photoProblemCodes = [
	"photo_too_big_limit",
	"photo_too_many_limit",
	"photo_not_a_photo",
	"photo_heic",
	"photo_broken",
	"photo_too_many_dots",
	"photo_not_kept",
] as const;
