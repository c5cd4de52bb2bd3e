import { useTranslation } from "react-i18next";
import { Form, href, Link, useNavigation } from "react-router";
import type { AnswerGroup } from "#app/collect/answer-lines.ts";
import type { Words } from "#app/collect/form.ts";
import type { Hindrance } from "#app/collect/progress.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import { AnswerList } from "#app/components/answer-list.tsx";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { LateNotice } from "./late-notice.tsx";
import { RehearsalNotice } from "./rehearsal-notice.tsx";
import { KeptWord, PhonePart, type PhonePage } from "./phone-part.tsx";
import { photoAddress } from "./photo-address.ts";
import { useStepTitle } from "#app/components/step-title.ts";

type Titled = { key: string; screen: { title: Words }; planting: PlantingAsked | null };
type ReviewViewProps = {
	groups: AnswerGroup[];
	steps: Titled[];
	closesAt: Date;
	timeZone: string;
	isLate?: boolean;
	isRehearsal?: boolean;
	/** Whether answers were sent in before, and whether something has changed since. */
	sent: boolean;
	changed: boolean;
	/** Why the answers could not be sent in. */
	refused: Hindrance | undefined;
	place: { surveyId: string; operationId: string };
	phone: Omit<PhonePage, "stage">;
};

/** All answers before they are sent, each with a way back to its screen. */
export function ReviewView({ groups, steps, refused, place, phone, ...rest }: ReviewViewProps) {
	const { t } = useTranslation("grower");
	const format = useFormat();
	const busy = useNavigation().state === "submitting";
	const titleOf = useStepTitle();
	const { closesAt, timeZone, isLate, sent, changed } = rest;
	const askAddress = (screen: string) =>
		`${href("/answer/:surveyId/:operationId/ask/:screen", { ...place, screen })}?review`;
	return (
		<Page title={t("review.title")} lead={t("review.lead")}>
			{rest.isRehearsal && <RehearsalNotice />}
			{isLate && <LateNotice />}
			{refused && <Unfinished steps={steps} {...refused} addressOf={askAddress} />}
			{sent && !changed && <Notice tone="info">{t("review.alreadySent")}</Notice>}
			{sent && changed && <Notice tone="attention">{t("review.changedNotSent")}</Notice>}
			<AnswerList groups={groups} editHref={askAddress} photoHref={photoAddress(place)} />
			<Form method="post" className="mt-8" data-answering="">
				{!isLate && <p className="mb-4">{t("review.until", { closes: format.moment(closesAt, timeZone) })}</p>}
				<Button busy={busy} data-on="">
					{t(sent ? "review.sendChanges" : "review.send")}
				</Button>
				<KeptWord />
			</Form>
			<PhonePart
				{...phone}
				stage="review"
				labels={Object.fromEntries(steps.map((step) => [step.key, titleOf(step)]))}
			/>
		</Page>
	);
}

type UnfinishedProps = Hindrance & { steps: Titled[]; addressOf: (screen: string) => string };

/** What is still missing or odd, with a way to each; answers that are there stay. */
function Unfinished({ steps, outcome, stepKeys, addressOf }: UnfinishedProps) {
	const { t } = useTranslation("grower");
	const titleOf = useStepTitle();
	return (
		<div role="alert">
			<Notice tone="caution" title={t(`review.${outcome}`)}>
				<ul className="list-none space-y-1">
					{steps
						.filter(({ key }) => stepKeys.includes(key))
						.map((step) => (
							<li key={step.key}>
								<Link to={addressOf(step.key)} className="inline-flex min-h-11 items-center">
									{titleOf(step)}
								</Link>
							</li>
						))}
				</ul>
			</Notice>
		</div>
	);
}
