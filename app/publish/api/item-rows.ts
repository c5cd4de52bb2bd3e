import type { TFunction } from "i18next";
import type { z } from "zod";
import type { FileFacts } from "../release-files.server.ts";
import type { Release, ReleaseArea, ReleaseMeasure } from "../release.ts";
import type { AreaItem, CropItem, FileItem, MeasureItem, ReleaseItem } from "./items.ts";

/** @param band how many answered, as a band; null where it is not told. */
export function releaseItem(release: Release, band: string | null, site: string): z.infer<typeof ReleaseItem> {
	const { title, revisionReason, withdrawn } = release;
	return {
		number: release.number,
		title_en: title.en,
		title_es: title.es,
		season: release.season,
		form: release.formKey,
		edition: release.edition,
		state: stateOf(release),
		published_at: release.publishedAt,
		respondents_band: band,
		revision_reason_en: revisionReason?.en ?? null,
		revision_reason_es: revisionReason?.es ?? null,
		replaced_by: release.replacedBy,
		withdrawn_at: withdrawn?.at ?? null,
		withdrawal_reason_en: withdrawn?.reason.en ?? null,
		withdrawal_reason_es: withdrawn?.reason.es ?? null,
		address: `${site}/data/${release.number}`,
	};
}

export function stateOf({ withdrawn, replacedBy }: Release): "current" | "replaced" | "withdrawn" {
	if (withdrawn) return "withdrawn";
	return replacedBy === null ? "current" : "replaced";
}

export function measureItem({
	key,
	label,
	description,
	kind,
	unit,
	decimals,
}: ReleaseMeasure): z.infer<typeof MeasureItem> {
	return {
		measure: key,
		name_en: label.en,
		name_es: label.es,
		description_en: description.en,
		description_es: description.es,
		kind,
		unit,
		decimals,
	};
}

export function cropItem(crop: string, words: Record<"en" | "es", TFunction>): z.infer<typeof CropItem> {
	return { crop, name_en: words.en(`common:crop.${crop}`), name_es: words.es(`common:crop.${crop}`) };
}

export function areaItem({ key, kind, name, parentKey, stateFips }: ReleaseArea): z.infer<typeof AreaItem> {
	return { area_code: key, area_kind: kind, area_name: name, lies_in: parentKey, state_code: stateFips };
}

export function fileItem({ name, mediaType, byteCount, sha256 }: FileFacts, folder: string): z.infer<typeof FileItem> {
	return { name, media_type: mediaType, bytes: byteCount, sha256, address: `${folder}/${name}` };
}
