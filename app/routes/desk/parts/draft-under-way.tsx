import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { DraftProgress } from "#app/release/draft.ts";

/** How far a draft is that a job works on, and a way to stop it. */
export function DraftUnderWay({ progress }: { progress: DraftProgress | null }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	return (
		<>
			{progress && (
				<div className="my-6">
					<p>{t(`progress.${progress.phase}`)}</p>
					{progress.total > 1 && <TallyCount count={progress.done} of={progress.total} label={t("progress.blocks")} />}
					{progress.gap !== null && progress.gap > 0 && (
						<p className="text-quiet">{t("progress.gap", { percent: format.number(100 * progress.gap, 1) })}</p>
					)}
				</div>
			)}
			<Form method="post" className="no-print mt-6">
				<Confirm
					trigger={t("cancel.button")}
					title={t("cancel.title")}
					body={t("cancel.body")}
					confirmLabel={t("cancel.confirm")}
					name="step"
					value="cancel"
					danger
				/>
			</Form>
		</>
	);
}
