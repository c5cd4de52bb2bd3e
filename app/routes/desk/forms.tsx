import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/forms";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { type ListedForm, listForms } from "#app/collect/editing/form-list.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return { forms: await desk.transaction((trx) => listForms(trx, desk.viewer)) };
}

/** Every form that there is: those that ship, the viewer's states' own, and others' to read and copy. */
export default function Forms({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { forms } = loaderData;
	const own = forms.filter(({ mayEdit }) => mayEdit);
	const others = forms.filter(({ isReady, mayEdit }) => !isReady && !mayEdit);
	return (
		<Page
			title={t("list.title")}
			lead={t("list.lead")}
			actions={<ButtonLink to={href("/desk/forms/new")}>{t("list.new")}</ButtonLink>}
		>
			<Section title={t("list.own")}>
				<FormTable caption={t("list.own")} forms={own} />
			</Section>
			<Section title={t("list.ready")}>
				<FormTable caption={t("list.ready")} forms={forms.filter(({ isReady }) => isReady)} />
			</Section>
			{others.length > 0 && (
				<Section title={t("list.others")}>
					<FormTable caption={t("list.others")} forms={others} />
				</Section>
			)}
		</Page>
	);
}

function FormTable({ caption, forms }: { caption: string; forms: ListedForm[] }) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const format = useFormat();
	return (
		<DataTable
			caption={caption}
			captionHidden
			rows={forms}
			rowKey={({ formId }) => formId}
			columns={[
				{
					key: "form",
					header: t("list.form"),
					cell: ({ formId, title }) => <Link to={href("/desk/forms/:formId", { formId })}>{said(title)}</Link>,
				},
				{
					key: "version",
					header: t("list.version"),
					cell: ({ isReady, version }) =>
						isReady
							? t("list.shipped")
							: version === null
								? t("list.neverPublished")
								: t("versions.name", { version: format.number(version) }),
				},
				{
					key: "surveys",
					header: t("list.surveys"),
					cell: ({ surveys }) =>
						surveys.length === 0 ? (
							t("list.noSurvey")
						) : (
							<ul className="-my-1 list-none">
								{surveys.map(({ surveyId, title, season }) => (
									<li key={surveyId}>
										<Link to={href("/desk/surveys/:surveyId", { surveyId })} className="inline-block py-1">
											{t("desk:surveys.name", { title: said(title), season })}
										</Link>
									</li>
								))}
							</ul>
						),
				},
				{
					key: "maker",
					header: t("list.maker"),
					cell: ({ isReady, makerName, stateFips }) =>
						isReady
							? t("list.network")
							: t("list.makerOf", {
									name: makerName ?? "",
									states: format.list(stateFips.map((state) => t(`common:state.${state}`))),
								}),
				},
				{
					key: "copy",
					header: t("list.copy"),
					cell: ({ formId, title }) => (
						<Link
							to={`${href("/desk/forms/new")}?from=${formId}`}
							aria-label={t("list.copyOf", { title: said(title) })}
						>
							{t("list.copy")}
						</Link>
					),
				},
			]}
			empty={<EmptyState title={t("list.emptyTitle")}>{t("list.emptyBody")}</EmptyState>}
		/>
	);
}
