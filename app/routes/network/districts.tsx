import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/districts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { inState } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { DistrictMap } from "#app/components/districts/district-map.tsx";
import { DistrictTable } from "#app/components/districts/district-table.tsx";
import { LastChange } from "#app/components/districts/last-change.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { DistrictsForm, typedOf } from "#app/directory/districts.schema.ts";
import { findStateDistricts } from "#app/directory/districts.server.ts";
import { districtsOf } from "#app/directory/districts.ts";
import { carryOut, namesNow, readTyped } from "#app/directory/redrawing.server.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { pictureOf } from "#app/publish/picture.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const state = await network.transaction((trx) =>
		inState(trx, params.stateFips, () => findStateDistricts(trx, network.viewer, params.stateFips)),
	);
	if (!state) throw refusal("page_not_found");
	const { stateFips, counties, version, lastChange } = state;
	return {
		stateFips,
		counties,
		version,
		lastChange,
		districts: districtsOf(namesNow(state)),
		picture: pictureOf([stateFips]),
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const { stateFips } = params;
	const form = parseForm(DistrictsForm, await request.formData());
	if (!form.ok) return data({ typed: null, problems: form.problems, meanwhile: false }, { status: 400 });
	const typed = typedOf(form.value);
	const answer = await network.transaction((trx) =>
		inState(trx, stateFips, async () => {
			const state = await findStateDistricts(trx, network.viewer, stateFips);
			const read = state ? readTyped(state, form.value) : "not_found";
			if (read === "not_found" || read.problems.length > 0) return read;
			return carryOut(trx, network.viewer, stateFips, { ...form.value, names: read.names });
		}),
	);
	if (answer === "not_found") throw refusal("page_not_found");
	if (answer === "changed_meanwhile") return data({ typed, problems: [], meanwhile: true }, { status: 409 });
	if (typeof answer === "object") return data({ typed, problems: answer.problems, meanwhile: false }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: `districts:toast.${answer}` });
	return redirect(href("/network/states/:stateFips", params), 303);
}

export const shouldRevalidate = lookAgain;

/** How a state's counties are grouped. By which answers a grouping does best, its associates see at their desk. */
export default function NetworkDistricts({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("districts");
	const { stateFips, counties, version, lastChange, districts, picture } = loaderData;
	const state = t(`common:state.${stateFips}`);
	const here = href("/network/states/:stateFips", { stateFips });
	return (
		<Page title={t("ofState", { state })} lead={t("networkLead")}>
			<p className="mb-4">
				<Link to={href("/network/states")}>{t("back")}</Link>
			</p>
			{actionData?.meanwhile && (
				<Notice tone="attention" title={t("meanwhile.title")}>
					<p>{t("meanwhile.body")}</p>
				</Notice>
			)}
			{picture && (
				<div className="max-w-lg">
					<DistrictMap
						picture={picture}
						grouping={{ districts, shown: 0, withheld: 0, told: [], untold: [] }}
						title={t("compare.now")}
						label={t("outlines", { count: districts.length })}
					/>
				</div>
			)}
			<DistrictTable
				counties={counties}
				filled={actionData?.typed ?? undefined}
				version={version}
				action={here}
				problems={actionData?.problems}
				formKey={`${stateFips} ${version}`}
			/>
			{lastChange && <LastChange change={lastChange} version={version} action={here} />}
		</Page>
	);
}
