import { useTranslation } from "react-i18next";
import { data, Form, href, redirect, type RouterContextProvider } from "react-router";
import type { Route } from "./+types/place";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { type CountyChoice, findOwnPlace, moveOperation, removePin } from "#app/directory/own-place.server.ts";
import { countyName } from "#app/i18n/county-name.ts";
import { getT } from "#app/i18n/middleware.server.ts";
import { countyOfPin } from "#app/lib/geography/county-of-pin.server.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { countiesAddress } from "#app/publish/geometry.server.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";
import { MoveNotice } from "./parts/move-notice.tsx";
import { PlaceForm } from "./parts/place-form.ts";
import { CountyPart, degreesOf, PinPart } from "./parts/place-parts.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { operation, pin, counties } = await getPlace(context, params.operationId);
	const states = [...new Set(counties.map(({ stateFips }) => stateFips))];
	return { operation, pin, counties, countiesAddress: countiesAddress(states) };
}

async function getPlace(context: Readonly<RouterContextProvider>, operationId: string) {
	const grower = requireOrchard(context);
	const place = await grower.transaction((trx) => findOwnPlace(trx, grower.viewer, operationId));
	if (!place) throw refusal("orchard_not_found");
	return place;
}

/** Finds the county of what was told. Another county than before is shown first, and saved when that is confirmed. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const { operation, counties } = await getPlace(context, params.operationId);
	const form = parseForm(PlaceForm, await request.formData());
	const { values } = form;
	const answer = (problems: Problem[], found: CountyChoice | null, status: number) =>
		data({ values, problems, found }, { status });
	if (!form.ok) return answer(form.problems, null, 400);
	const told = form.value;
	const back = href("/orchard/:operationId/place", params);
	if (told.step === "remove_pin") {
		await grower.transaction((trx) => removePin(trx, grower.viewer, params.operationId));
		context.get(sessionContext).flash("toast", { key: "orchard:place.toast.pinRemoved" });
		return redirect(back, 303);
	}

	const pin = told.step === "pin" ? { latitude: told.latitude, longitude: told.longitude } : null;
	const countyFips = told.step === "pin" ? countyOfPin(told) : told.countyFips;
	const found = counties.find((county) => county.countyFips === countyFips);
	if (!found && told.step === "pin") return answer([{ field: "latitude", code: "pin_outside" }], null, 400);
	if (!found) return answer([{ field: "countyFips", code: "unknown_county" }], null, 400);
	if (found.countyFips !== operation.countyFips && told.confirmed !== "yes") return answer([], found, 200);

	const move = { countyFips: found.countyFips, pin };
	const outcome = await grower.transaction((trx) => moveOperation(trx, grower.viewer, params.operationId, move));
	if (outcome === "not_found") throw refusal("orchard_not_found");
	context.get(sessionContext).flash("toast", {
		key: outcome === "moved" ? "orchard:place.toast.moved" : "orchard:place.toast.stayed",
		values: { county: countyName(getT(context, "common"), found) },
	});
	return redirect(back, 303);
}

export default function Place({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const { operation, pin } = loaderData;
	const { values, problems, found } = actionData ?? {};
	const state = t(`common:state.${operation.stateFips}`);
	return (
		<Page title={t("place.title")} lead={t("place.lead", { operation: operation.name })}>
			<BackToOrchard />
			<ErrorSummary
				problems={problems}
				labels={{
					latitude: t("place.latitude"),
					longitude: t("place.longitude"),
					countyFips: t("place.county"),
				}}
			/>
			{found && <MoveNotice key={found.countyFips} from={operation} to={found} values={values ?? {}} />}
			<DescriptionList
				items={[
					{ term: t("place.county"), detail: t("home.place", { county: operation.countyName, state }) },
					{ term: t("place.pin"), detail: pin ? t("place.pinAt", degreesOf(pin)) : t("place.noPin") },
				]}
			/>
			{pin && (
				<Form method="post" className="mt-3">
					<Button kind="secondary" name="step" value="remove_pin">
						{t("place.removePin")}
					</Button>
				</Form>
			)}
			<PinPart {...loaderData} values={values} problems={problems} />
			<CountyPart {...loaderData} values={values} problems={problems} />
		</Page>
	);
}
