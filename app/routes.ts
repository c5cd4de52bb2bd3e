import { index, layout, prefix, route, type RouteConfig } from "@react-router/dev/routes";

export default [
	route("healthz", "routes/api/healthz.ts"),
	route("language", "routes/public/language.ts"),

	// Everything a shell of header, season and footer goes around.
	layout("routes/public/layout.tsx", [
		index("routes/public/home.tsx"),
		route("map", "routes/public/map.tsx"),
		route("reports", "routes/public/reports.tsx"),
		route("reports/:slug", "routes/public/report.tsx"),
		route("subscribe", "routes/subscriber/subscribe.tsx"),
		route("subscribe/:token", "routes/subscriber/confirm.tsx"),
		route("unsubscribe/:token", "routes/subscriber/unsubscribe.tsx"),
		route("methods", "routes/public/methods.tsx"),
		route("about", "routes/public/about.tsx"),
		route("privacy", "routes/public/privacy.tsx"),
		route("accessibility", "routes/public/accessibility.tsx"),
		route("calendar", "routes/public/calendar.tsx"),
		route("data", "routes/public/data.tsx"),
		route("data/:release", "routes/public/data-release.tsx"),
		route("api", "routes/public/api.tsx"),

		route("sign-in", "routes/public/sign-in.tsx"),
		route("sign-out", "routes/public/sign-out.tsx"),
		route("me", "routes/public/me.tsx"),

		...prefix("dataroom", [
			layout("routes/dataroom/layout.tsx", [
				index("routes/dataroom/home.tsx"),
				route("tables", "routes/dataroom/tables.tsx"),
				route("keys", "routes/dataroom/keys.tsx"),
				route("access", "routes/dataroom/access.tsx"),
			]),
		]),
		route("*", "routes/public/not-found.tsx"),
	]),
	route("reports.atom", "routes/public/report-feed.ts"),
	route("reports/:slug/:file", "routes/public/report-file.ts"),
	route("map/counties.json", "routes/public/map-counties.ts"),
	route("map/:file", "routes/public/map-file.ts"),
	route("data/:release/:citation", "routes/public/cite.ts"),
	route("map/figures/:release/:measure/:crop", "routes/public/map-figures.ts"),
	route("dataroom/releases/:release/:file", "routes/dataroom/file.ts"),
	route("dataroom/tables/:file", "routes/dataroom/table-file.ts"),

	// Programs: JSON, CSV and files, with refusals of their own kind.
	...prefix("api/v1", [
		index("routes/api/v1/entry.ts"),
		route("openapi.json", "routes/api/v1/openapi.ts"),
		route("releases", "routes/api/v1/releases.ts"),
		...prefix("releases/:release", [
			index("routes/api/v1/release.ts"),
			route("measures", "routes/api/v1/measures.ts"),
			route("crops", "routes/api/v1/crops.ts"),
			route("areas", "routes/api/v1/areas.ts"),
			route("cells", "routes/api/v1/cells.ts"),
			route("geometry", "routes/api/v1/geometry.ts"),
			route("files", "routes/api/v1/files.ts"),
			route("files/:file", "routes/api/v1/file.ts"),
		]),
		route("*", "routes/api/v1/unknown.ts"),
	]),

	route("sign-in/start", "routes/public/sign-in-start.ts"),
	route("sign-in/callback", "routes/public/sign-in-callback.ts"),

	route("orchard/:file", "routes/grower/my-data.ts"),
	route("orchard/:operationId/answers/:surveyId/photos/:photoId", "routes/grower/own-photo.ts"),

	// Growers: one column, nothing but the question.
	layout("routes/grower/layout.tsx", [
		route("r/:token", "routes/grower/link.tsx"),
		route("stop-mail/:token", "routes/grower/stop-mail.tsx"),
		route("check/:token", "routes/grower/check-answer.tsx"),
		...prefix("answer/:surveyId/:operationId", [
			index("routes/grower/start.tsx"),
			route("ask/:screen", "routes/grower/screen.tsx"),
			route("review", "routes/grower/review.tsx"),
			route("receipt", "routes/grower/receipt.tsx"),
		]),
		...prefix("orchard", [
			layout("routes/grower/orchard-layout.tsx", [
				index("routes/grower/orchard.tsx"),
				route("compare/:surveyId", "routes/grower/compare.tsx"),
				...prefix(":operationId", [
					route("answers/:surveyId", "routes/grower/own-answers.tsx"),
					route("plantings", "routes/grower/plantings.tsx"),
					route("plantings/new", "routes/grower/planting-new.tsx"),
					route("plantings/:plantingId", "routes/grower/planting.tsx"),
					route("place", "routes/grower/place.tsx"),
					route("settings", "routes/grower/settings.tsx"),
					route("leave", "routes/grower/leave.tsx"),
				]),
			]),
		]),
	]),
	route("answer/:surveyId/:operationId/keep/:screen", "routes/grower/keep.ts"),
	route("answer/:surveyId/:operationId/pack", "routes/grower/pack.ts"),
	route("answer/:surveyId/:operationId/photos/:photoId", "routes/grower/photo.ts"),
	// What a phone draws these pages with where there is no signal.
	route("answer/offline", "routes/grower/offline.tsx"),
	route("answer/worker.js", "routes/grower/worker.ts"),

	route("desk/surveys/:surveyId/responses/:responseId/photos/:photoId", "routes/desk/photo.ts"),
	route("desk/growers/list.csv", "routes/desk/growers-csv.ts"),
	route("desk/growers/import/:importId/to-mend.csv", "routes/desk/growers-import-csv.ts"),
	...prefix("desk", [
		layout("routes/desk/layout.tsx", [
			index("routes/desk/overview.tsx"),
			route("growers", "routes/desk/growers.tsx"),
			route("growers/chosen", "routes/desk/growers-chosen.tsx"),
			route("growers/duplicates", "routes/desk/growers-duplicates.tsx"),
			route("growers/merge/:keptId/:droppedId", "routes/desk/growers-merge.tsx"),
			route("growers/import", "routes/desk/growers-import.tsx"),
			route("growers/import/:importId", "routes/desk/growers-import-file.tsx"),
			route("growers/:operationId", "routes/desk/grower.tsx"),
			route("growers/:operationId/edit", "routes/desk/grower-edit.tsx"),
			route("surveys", "routes/desk/surveys.tsx"),
			route("surveys/new", "routes/desk/survey-new.tsx"),
			...prefix("surveys/:surveyId", [
				layout("routes/desk/survey-layout.tsx", [
					index("routes/desk/survey.tsx"),
					route("brief", "routes/desk/brief.tsx"),
					route("mailing", "routes/desk/mailing.tsx"),
					route("mailing/:kind", "routes/desk/mail-preview.tsx"),
					route("answered", "routes/desk/answered.tsx"),
					route("calls", "routes/desk/calls.tsx"),
					route("enter/:operationId", "routes/desk/enter.tsx"),
					route("responses", "routes/desk/responses.tsx"),
					route("responses/:responseId", "routes/desk/response.tsx"),
					route("checks", "routes/desk/checks.tsx"),
					route("checks/:findingId", "routes/desk/check.tsx"),
					route("coding", "routes/desk/coding.tsx"),
					route("estimates", "routes/desk/estimates.tsx"),
					route("estimates/compared", "routes/desk/estimates-compared.tsx"),
					route("estimates/:areaKey/:cropKey/:measureKey", "routes/desk/estimate.tsx"),
					route("release", "routes/desk/release.tsx"),
				]),
			]),
			route("surveys/:surveyId/paper/:operationId?", "routes/desk/paper.tsx"),
			route("surveys/:surveyId/estimates/:areaKey/:cropKey/:measureKey/figure.csv", "routes/desk/estimate-csv.ts"),
			route("surveys/:surveyId/mailing/:kind/html", "routes/desk/mail-html.ts"),
			route("districts", "routes/desk/districts.tsx"),
			route("forms", "routes/desk/forms.tsx"),
			route("forms/new", "routes/desk/form-new.tsx"),
			...prefix("forms/:formId", [
				layout("routes/desk/form-layout.tsx", [
					index("routes/desk/form.tsx"),
					route("questions/:key", "routes/desk/form-question.tsx"),
					route("screens/:key", "routes/desk/form-screen.tsx"),
					route("screens/:key/checks/:check", "routes/desk/form-edit-check.tsx"),
					route("try", "routes/desk/form-try.tsx"),
					route("check", "routes/desk/form-check.tsx"),
					route("measures", "routes/desk/form-measures.tsx"),
					route("versions", "routes/desk/form-versions.tsx"),
				]),
			]),
			route("reports", "routes/desk/reports.tsx"),
			route("reports/:reportId", "routes/desk/report.tsx"),
			route("reports/:reportId/versions", "routes/desk/report-versions.tsx"),
		]),
	]),

	route("network/log.csv", "routes/network/log-csv.ts"),
	...prefix("network", [
		layout("routes/network/layout.tsx", [
			index("routes/network/people.tsx"),
			route("releases", "routes/network/releases.tsx"),
			route("releases/:draftId", "routes/network/release.tsx"),
			route("reports", "routes/network/reports.tsx"),
			route("reports/:reportId", "routes/network/report.tsx"),
			route("access", "routes/network/access.tsx"),
			route("settings", "routes/network/settings.tsx"),
			route("log", "routes/network/log.tsx"),
		]),
	]),
] satisfies RouteConfig;
