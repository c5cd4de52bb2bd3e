import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { SavedView } from "#app/directory/saved-views.server.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

type SavedViewsProps = {
	views: SavedView[];
	/** The filters of this very list. */
	parts: Record<string, string>;
	values?: FormValues;
	problems?: Problem[];
};

export function viewLabels(t: TFunction<"growers">): Record<string, string> {
	return { name: t("views.name"), savedViewId: t("views.which"), newName: t("views.newName") };
}

const addressOf = (view: SavedView) => new URLSearchParams(view.parts).toString();

/** The person's own views, each a link, and a form that keeps what is shown now as another. */
export function SavedViews({ views, parts, values, problems }: SavedViewsProps) {
	const { t } = useTranslation("growers");
	const problemOf = (name: string) => problems?.find(({ field }) => field === name);
	const shown = new URLSearchParams(parts).toString();
	return (
		<div className="no-print mb-5">
			{views.length > 0 && (
				<nav aria-label={t("views.title")} className="mb-2">
					<ul className="flex flex-wrap gap-x-5 gap-y-1">
						{views.map((view) => (
							<li key={view.savedViewId}>
								<Link
									to={`${href("/desk/growers")}?${addressOf(view)}`}
									aria-current={addressOf(view) === shown ? "true" : undefined}
									className="inline-flex min-h-9 items-center wrap-anywhere aria-[current=true]:font-bold"
								>
									{view.name}
								</Link>
							</li>
						))}
					</ul>
				</nav>
			)}
			<details open={problems ? true : undefined}>
				<summary className="min-h-9 cursor-pointer text-damson underline underline-offset-4">
					{t(views.length > 0 ? "views.manageAll" : "views.manage")}
				</summary>
				<div className="mt-3 border-l-2 border-rule pl-4">
					<Form method="post" noValidate key={views.length}>
						<TextField
							name="name"
							label={t("views.name")}
							help={t("views.help")}
							defaultValue={values ? String(values.name ?? "") : ""}
							problem={problemOf("name")}
							maxLength={80}
						/>
						<Button kind="secondary" name="step" value="save">
							{t("views.save")}
						</Button>
					</Form>
					{views.length > 0 && (
						<Form method="post" noValidate key={views.map(({ name }) => name).join("\n")} className="mt-6">
							<ChoiceField
								kind="select"
								name="savedViewId"
								legend={t("views.which")}
								options={views.map(({ savedViewId, name }) => ({ value: savedViewId, label: name }))}
								defaultValue={String(
									values?.savedViewId ?? views.find((view) => addressOf(view) === shown)?.savedViewId ?? "",
								)}
								problem={problemOf("savedViewId")}
							/>
							<TextField
								name="newName"
								label={t("views.newName")}
								defaultValue={values ? String(values.newName ?? "") : ""}
								problem={problemOf("newName")}
								maxLength={80}
							/>
							<Button kind="secondary" name="step" value="rename">
								{t("views.rename")}
							</Button>
						</Form>
					)}
					{views.length > 0 && (
						<ul className="mt-6 grid gap-2">
							{views.map((view) => (
								<li key={view.savedViewId}>
									<Form method="post" className="flex flex-wrap items-center gap-3">
										<span className="wrap-anywhere">{view.name}</span>
										<input type="hidden" name="savedViewId" value={view.savedViewId} />
										<Button
											kind="quiet"
											size="small"
											name="step"
											value="drop"
											aria-label={t("views.dropOf", { name: view.name })}
										>
											{t("views.drop")}
										</Button>
									</Form>
								</li>
							))}
						</ul>
					)}
				</div>
			</details>
		</div>
	);
}
