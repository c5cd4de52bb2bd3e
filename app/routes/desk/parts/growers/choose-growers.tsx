import { useTranslation } from "react-i18next";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Counted } from "#app/lib/page-by-key.server.ts";

type ChooseGrowersProps = { shown: number } & Counted;

/** Below the list: whom the next page is about. Nothing happens before that page has said how many they are. */
export function ChooseGrowers({ shown, total, moreThanTotal }: ChooseGrowersProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const counted = (count: number) => ({ count, value: format.number(count) });
	return (
		<div className="no-print mt-4 flex flex-wrap items-end gap-3 *:mb-0">
			<ChoiceField
				kind="select"
				name="which"
				legend={t("choose.which")}
				options={[
					{ value: "ticked", label: t("choose.ticked") },
					{ value: "page", label: t("choose.page", counted(shown)) },
					{
						value: "matching",
						label: t(moreThanTotal ? "choose.matchingMore" : "choose.matching", counted(total)),
					},
				]}
			/>
			<Button kind="secondary">{t("choose.go")}</Button>
		</div>
	);
}
