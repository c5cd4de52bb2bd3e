import { useTranslation } from "react-i18next";
import type { FormDifference } from "#app/collect/editing/difference.ts";
import { useDifferenceWords } from "./finding-words.ts";

/** What changed between two versions, a sentence a change. */
export function Differences({ differences }: { differences: FormDifference[] }) {
	const { t } = useTranslation("forms");
	const words = useDifferenceWords();
	if (differences.length === 0) return <p className="text-quiet">{t("difference.none")}</p>;
	return (
		<ul className="max-w-prose list-disc space-y-1 pl-6">
			{differences.map((difference) => (
				<li key={JSON.stringify(difference)}>{words(difference)}</li>
			))}
		</ul>
	);
}
