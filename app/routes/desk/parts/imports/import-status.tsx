import { useEffect } from "react";
import { useTranslation } from "react-i18next";
import { useRevalidator } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import type { Import, ImportStatus } from "#app/directory/import/imports.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";

const tones: Record<ImportStatus, "neutral" | "good" | "attention"> = {
	reading: "neutral",
	columns: "attention",
	checking: "neutral",
	checked: "attention",
	importing: "neutral",
	imported: "good",
	undoing: "neutral",
	undone: "neutral",
	dropped: "neutral",
};
const askEveryMs = 1_000;

/** How a file stands: a step that came to nothing says so, and so does a file of which no row can be taken in. */
export function ImportStatusBadge({ file }: { file: Pick<Import, "status" | "failure" | "counts"> }) {
	const { t } = useTranslation("growers");
	const { status, failure, counts } = file;
	if (failure) return <StatusBadge tone="attention">{t(`import.refused.${failure.why}.title`)}</StatusBadge>;
	if (status === "checked" && counts?.operations === 0)
		return <StatusBadge tone="attention">{t("import.status.allBad")}</StatusBadge>;
	return <StatusBadge tone={tones[status]}>{t(`import.status.${status}`)}</StatusBadge>;
}

type ImportProgressProps = { status: ImportStatus; done: number; total: number };

/** How far the work has come. The page asks again by itself; without scripts, a link does. */
export function ImportProgress({ status, done, total }: ImportProgressProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const hydrated = useHydrated();
	const { revalidate } = useRevalidator();
	useEffect(() => {
		const timer = setInterval(() => void revalidate(), askEveryMs);
		return () => clearInterval(timer);
	}, [revalidate]);
	const words =
		total > 0
			? t("import.progressOf", { done: format.number(done), total: format.number(total) })
			: t("import.progressBegun");
	return (
		<div className="my-6 max-w-prose">
			<p id="import-progress" className="font-bold">
				{t(`import.status.${status}`)}
			</p>
			<progress
				aria-labelledby="import-progress"
				max={total || undefined}
				value={total > 0 ? done : undefined}
				className="my-2 block h-4 w-full accent-damson"
			/>
			<output>{words}</output>
			{!hydrated && (
				<p className="mt-4">
					<ButtonLink to="" reloadDocument kind="secondary">
						{t("import.lookAgain")}
					</ButtonLink>
				</p>
			)}
		</div>
	);
}
