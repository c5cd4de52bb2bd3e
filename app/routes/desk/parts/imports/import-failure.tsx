import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";
import type { ImportFailure } from "#app/directory/import/imports.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";

/** Why the last step came to nothing, and what to do. */
export function ImportFailureNotice({ failure: { why, names, count } }: { failure: ImportFailure }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<Notice tone="attention" title={t(`import.refused.${why}.title`)}>
			<p>{t(`import.refused.${why}.body`)}</p>
			{names && count !== undefined && (
				<p className="mt-2">
					{t("import.inTheWay", { count, value: format.number(count), names: format.list(names) })}
				</p>
			)}
		</Notice>
	);
}
