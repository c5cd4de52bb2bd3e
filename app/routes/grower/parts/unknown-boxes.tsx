import { useTranslation } from "react-i18next";
import type { StepValues } from "#app/collect/step-fields.ts";

const kinds = ["dont_know", "refused"] as const;

/** "I don't know" and "I would rather not say" are answers too; boxes, since without scripts a dot cannot be taken back. */
export function UnknownBoxes({ name, about, values }: { name: string; about: string; values: StepValues }) {
	const { t } = useTranslation("grower");
	const ticked = new Set([values[name] ?? []].flat());
	return (
		<fieldset aria-label={about} className="mt-1 flex flex-wrap gap-x-6 text-base">
			{kinds.map((kind) => (
				<label key={kind} htmlFor={`${name}-${kind}`} className="flex min-h-11 items-center gap-2.5">
					<input
						type="checkbox"
						id={`${name}-${kind}`}
						name={name}
						value={kind}
						defaultChecked={ticked.has(kind)}
						className="size-5 shrink-0 accent-damson"
					/>
					{t(`unknown.${kind}`)}
				</label>
			))}
		</fieldset>
	);
}

/** One pair for all shares of a screen, instead of one pair each. */
export function ScreenUnknown({ values }: { values: StepValues }) {
	const { t } = useTranslation("grower");
	return (
		<div className="mb-6 border-t border-rule pt-4">
			<p className="font-bold">{t("unknown.screen")}</p>
			<UnknownBoxes name="screen_kind" about={t("unknown.screen")} values={values} />
		</div>
	);
}
