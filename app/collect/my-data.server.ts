import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "./answer-place.server.ts";
import { listAnswers, type Submission } from "./answer-rows.server.ts";
import { listMails } from "./mail-list.server.ts";
import { listPhotos } from "./photo-rows.server.ts";

export type MyData = Awaited<ReturnType<typeof readMyData>>;

type PhotoAddress = (place: AnswerPlace & { photoId: string }) => string;

/**
 * Everything that is kept about a signed-in grower's operations, as it stands, under names that a stranger can read.
 * @param photoAddress where the file of a photo is to be had.
 */
export async function readMyData(trx: Trx, viewer: Grower, photoAddress: PhotoAddress) {
	if (viewer.link) return [];
	const operations = await selectOperations(trx, viewer).execute();
	const told = [];
	for (const operation of operations) {
		const { operation_id: operationId, longitude, latitude, set_at, ...directory } = operation;
		told.push({
			operation_id: operationId,
			...directory,
			pin: longitude === null ? null : { longitude, latitude, set_at },
			plantings: await listPlantings(trx, operationId),
			surveys: await listSurveys(trx, operationId, photoAddress),
		});
	}
	return told;
}

function selectOperations(trx: Trx, viewer: Grower) {
	return trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.owner as w", "w.owner_id", "o.owner_id")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.leftJoin("directory.operation_pin as p", "p.operation_id", "o.operation_id")
		.where("o.operation_id", "in", viewer.operationIds)
		.select(["o.operation_id", "o.name", "w.name as owner", "o.county_fips", "c.name as county", "s.name as state"])
		.select(["o.contact_name", "o.email", "o.phone", "o.language", "o.mass_unit", "o.mail_wanted", "o.status"])
		.select(["o.created_at", "o.updated_at", "p.longitude", "p.latitude", "p.set_at"])
		.orderBy("o.name")
		.orderBy("o.operation_id");
}

function listPlantings(trx: Trx, operationId: string) {
	return trx
		.selectFrom("directory.planting")
		.where("operation_id", "=", operationId)
		.select(["planting_id", "crop_key", "cultivar", "bearing_trees", "young_trees", "area_acres", "planted_year"])
		.select("removed_on")
		.orderBy("crop_key")
		.orderBy("planting_id")
		.execute();
}

async function listSurveys(trx: Trx, operationId: string, photoAddress: PhotoAddress) {
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.operation_id", "=", operationId)
		.select(["s.survey_id", "s.season", "s.title", "s.opened_at", "s.closes_at"])
		.select(["f.county_fips", "f.size_class", "f.disposition", "f.disposition_at"])
		.select(["r.response_id", "r.mode", "r.language", "r.pledge_version", "r.pledged_at", "r.receipt_code"])
		.select(["r.started_at", "r.submitted_at", "r.withdrawn_at"])
		.orderBy("s.season")
		.orderBy("s.opened_at")
		.execute();
	const told = [];
	for (const { response_id: responseId, ...survey } of rows) {
		told.push({
			...survey,
			title: survey.title as { en: string; es: string },
			answers_now: responseId ? await listAnswers(trx, responseId) : [],
			submissions: responseId ? await listSubmissions(trx, responseId) : [],
			photos: (responseId ? await listPhotos(trx, responseId) : []).map(({ photoId, ...photo }) => ({
				photo_id: photoId,
				question_key: photo.questionKey,
				added_at: photo.addedAt,
				width_px: photo.widthPx,
				height_px: photo.heightPx,
				size_bytes: photo.sizeBytes,
				file: photoAddress({ surveyId: survey.survey_id, operationId, photoId }),
			})),
			mails: (await listMails(trx, survey.survey_id, [operationId])).get(operationId) ?? [],
		});
	}
	return told;
}

async function listSubmissions(trx: Trx, responseId: string) {
	const rows = await trx
		.selectFrom("collect.submission")
		.select(["version", "submitted_at", "late", "withdrawn_at", "answers"])
		.where("response_id", "=", responseId)
		.orderBy("version")
		.execute();
	return rows.map((row) => ({ ...row, answers: (row.answers as Submission).answers }));
}
