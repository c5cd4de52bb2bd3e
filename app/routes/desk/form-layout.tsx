import { useTranslation } from "react-i18next";
import { href, Link, Outlet } from "react-router";
import type { Route } from "./+types/form-layout";
import { differencesBetween } from "#app/collect/editing/difference.ts";
import { definitionOfDraft } from "#app/collect/editing/draft.ts";
import type { DeskForm } from "#app/collect/editing/form-drafts.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Tabs } from "#app/components/tabs.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";
import { getForm } from "./parts/forms/form-access.server.ts";
import { UndoBar } from "./parts/forms/undo-bar.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	return {
		title: form.draft.title,
		mayEdit: form.mayEdit,
		makerName: form.makerName,
		version: form.published?.version ?? null,
		last: form.mayEdit ? lastChange(form) : null,
	};
}

function lastChange({ before, draft, edit, editedBy, editedAt }: DeskForm) {
	if (!before) return null;
	const differences = differencesBetween(definitionOfDraft(before), definitionOfDraft(draft));
	return { edit, by: editedBy, at: editedAt, differences: differences.slice(0, 1) };
}

export default function FormLayout({ loaderData, params }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const said = useFormWords();
	const { title, mayEdit, makerName, version, last } = loaderData;
	const { formId } = params;
	// A ready form has no version of its own until a survey asks it, and any survey can.
	const isReady = !mayEdit && !makerName;
	const unpublished = isReady ? t("layout.ready") : t("layout.unpublished");
	return (
		<Page
			title={said(title)}
			lead={version === null ? unpublished : t("layout.version", { version: format.number(version) })}
			actions={
				<ButtonLink to={`${href("/desk/forms/new")}?from=${formId}`} kind="secondary">
					{t("list.copy")}
				</ButtonLink>
			}
		>
			<p className="no-print mb-4">
				<Link to={href("/desk/forms")}>{t("layout.back")}</Link>
			</p>
			{!mayEdit && (
				<Notice tone="info">{isReady ? t("layout.readOnlyReady") : t("layout.readOnly", { name: makerName })}</Notice>
			)}
			<Tabs
				label={t("layout.parts")}
				items={[
					{ to: href("/desk/forms/:formId", { formId }), label: t("layout.questions"), end: true },
					{ to: href("/desk/forms/:formId/try", { formId }), label: t("layout.try") },
					{ to: href("/desk/forms/:formId/check", { formId }), label: t("layout.check") },
					{ to: href("/desk/forms/:formId/measures", { formId }), label: t("layout.measures") },
					{ to: href("/desk/forms/:formId/versions", { formId }), label: t("layout.versions") },
				]}
			/>
			{last && <UndoBar formId={formId} last={last} />}
			<Outlet />
		</Page>
	);
}
