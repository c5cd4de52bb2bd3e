import type { AddressInfo, Socket } from "node:net";
import { simpleParser, type ParsedMail } from "mailparser";
import type { Client } from "pg";
import { SMTPServer } from "smtp-server";
import type { Associate } from "#app/auth/viewer.ts";
import { sendInvitations } from "#app/collect/invitations.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { addOperation, asDesk, draftOf, type NewOperation } from "./surveys-fixture.ts";

/** `hang up`: the server has the whole mail and says nothing more. */
type Trouble = { at: "from" | "to" | "data"; code: number } | "hang up" | null;

/** A real mail server on a free port that can be told to answer with trouble, and keeps what it took. */
export async function startMailServer() {
	const sockets = new Set<Socket>();
	const state = {
		received: [] as ParsedMail[],
		trouble: null as Trouble,
		onMail: undefined as (() => void) | undefined,
	};
	const answerOf = (at: "from" | "to" | "data") => {
		const { trouble } = state;
		return trouble !== null && trouble !== "hang up" && trouble.at === at
			? Object.assign(new Error("no"), { responseCode: trouble.code })
			: null;
	};
	const server = new SMTPServer({
		authOptional: true,
		disabledCommands: ["STARTTLS"],
		onMailFrom: (_address, _session, done) => done(answerOf("from")),
		onRcptTo: (_address, _session, done) => done(answerOf("to")),
		onData(stream, _session, done) {
			void simpleParser(stream).then((mail) => {
				if (!answerOf("data")) state.received.push(mail);
				state.onMail?.();
				if (state.trouble === "hang up") for (const socket of sockets) socket.destroy();
				else done(answerOf("data"));
			});
		},
	});
	server.server.on("connection", (socket: Socket) => {
		sockets.add(socket);
		socket.once("close", () => sockets.delete(socket));
	});
	await new Promise<void>((resolve) => server.listen(0, "127.0.0.1", resolve));
	const { port } = server.server.address() as AddressInfo;
	return Object.assign(state, {
		url: `smtp://127.0.0.1:${port}`,
		reset: () => Object.assign(state, { received: [], trouble: null, onMail: undefined }),
		stop: () => new Promise<void>((resolve) => server.close(() => resolve())),
	});
}

/** An open survey of its own with one grower invited; nothing sent yet. All earlier operations leave, so none is in its frame. */
export async function inviteGrower(owner: Client, viewer: Associate, operation: Partial<NewOperation> = {}) {
	await owner.query("update directory.operation set status = 'left'");
	const operationId = await addOperation(owner, { state: "19", ...operation });
	const made = await asDesk(viewer, (trx) => createSurvey(trx, viewer, draftOf(["19"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(viewer, (trx) => openSurvey(trx, viewer, surveyId));
	await asDesk(viewer, (trx) => sendInvitations(trx, viewer, surveyId));
	const { rows } = await owner.query("select mailing_id from collect.mailing where survey_id = $1", [surveyId]);
	return { operationId, surveyId, mailingId: rows[0]?.mailing_id as string };
}

export async function findMailingRow(owner: Client, mailingId: string) {
	const { rows } = await owner.query(
		`select m.*, f.disposition, o.mail_returned_at from collect.mailing m
		join collect.frame_operation f using (survey_id, operation_id) join directory.operation o using (operation_id)
		where mailing_id = $1`,
		[mailingId],
	);
	return rows[0];
}

export async function addMailing(owner: Client, surveyId: string, operationId: string, kind: string): Promise<string> {
	const { rows } = await owner.query(
		`insert into collect.mailing (survey_id, operation_id, kind, wave) select $1, $2, $3, 1 + count(*) from collect.mailing
		where survey_id = $1 and operation_id = $2 and kind = $3 returning mailing_id`,
		[surveyId, operationId, kind],
	);
	return rows[0].mailing_id as string;
}

export const tokenIn = (mail: ParsedMail | undefined) =>
	/https:\/\/survey\.example\/r\/([\w-]+)/.exec(mail?.text ?? "")?.[1] ?? "";
