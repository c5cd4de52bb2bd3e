import { useEffect } from "react";
import { useTranslation } from "react-i18next";
import { useRevalidator } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import type { ImportStatus } from "#app/directory/import/imports.server.ts";
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

export function ImportStatusBadge({ status }: { status: ImportStatus }) {
	const { t } = useTranslation("growers");
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
