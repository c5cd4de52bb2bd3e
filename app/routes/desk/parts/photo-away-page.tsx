import { useTranslation } from "react-i18next";
import { Form, Link, useNavigation } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { ReportPhoto } from "#app/publish/drafting/report-photos.server.ts";
import { photoReasons } from "#app/publish/report-photo.ts";

type PhotoAwayPageProps = { photo: ReportPhoto; address: string; back: string; problems?: Problem[] };

/** Shows what is taken away before it is, and asks why: it cannot be undone, and readers are told the reason. */
export function PhotoAwayPage({ photo, address, back, problems }: PhotoAwayPageProps) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const legend = t("photos.takeAway.because");
	return (
		<Page title={t("photos.takeAway.title")} lead={t("photos.takeAway.lead")}>
			<p className="mb-4">
				<Link to={back}>{t("edits.back")}</Link>
			</p>
			<ErrorSummary problems={problems} labels={{ because: legend }} />
			<figure className="mb-6">
				<img src={address} alt="" className="max-h-80 max-w-full border border-line" />
				<figcaption className="mt-1 text-sm text-quiet">
					{t("photos.takeAway.preview", { name: photo.consentOf, date: format.day(photo.consentOn) })}
				</figcaption>
			</figure>
			<Form method="post" noValidate>
				<ChoiceField
					kind="radio"
					name="because"
					legend={legend}
					options={photoReasons.map((value) => ({ value, label: t(`photos.takeAway.reason.${value}`) }))}
					problem={problems?.find(({ field }) => field === "because")}
				/>
				<Button kind="danger" busy={busy}>
					{t("photos.takeAway.submit")}
				</Button>
			</Form>
		</Page>
	);
}
