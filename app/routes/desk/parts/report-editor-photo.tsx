import { useTranslation } from "react-i18next";
import { href } from "react-router";
import { ChoiceField } from "#app/components/choice-field.tsx";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Block } from "#app/publish/report.ts";
import { type Offered, TextPair } from "./report-editor-fields.tsx";
import { usePhotoName } from "./report-photo-name.ts";

type PhotoFieldsProps = {
	block: Extract<Block, { type: "photo" }>;
	name: string;
	label: string;
	offered: Offered;
	problems?: Problem[];
};

/** Which of the report's photos stands here, and what it shows, in words for who cannot see it. */
export function PhotoFields({ block, name, label, offered: { photos }, problems }: PhotoFieldsProps) {
	const { t } = useTranslation("report");
	const photoName = usePhotoName();
	return (
		<>
			<ChoiceField
				kind="select"
				name={`${name}.photo`}
				legend={t("photos.which")}
				defaultValue={block.photo}
				help={photos.length === 0 ? t("photos.noneYet") : undefined}
				problem={problems?.find(({ field }) => field === `${name}.photo`)}
				options={[
					{ value: "", label: t("photos.notChosen") },
					...photos.flatMap((photo, index) =>
						photo.takenAway ? [] : [{ value: photo.photoId, label: photoName(photo, index) }],
					),
				]}
			/>
			{block.photo && (
				<img
					src={href("/desk/report-photos/:photoId", { photoId: block.photo })}
					alt={t("photos.chosen")}
					className="mb-4 h-auto max-h-48 w-auto max-w-full border border-line"
				/>
			)}
			<TextPair name={`${name}.alt`} label={label} value={block.alt} problems={problems} help={t("photos.altHelp")} />
		</>
	);
}
