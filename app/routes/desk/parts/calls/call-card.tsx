import { useTranslation } from "react-i18next";
import { Form, href, Link, useSearchParams } from "react-router";
import type { Call } from "#app/collect/calls.server.ts";
import type { Contact } from "#app/collect/contacts.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { Section } from "#app/components/section.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { GrowerLink } from "../grower-link.tsx";
import { useGrowerName } from "../grower-name.ts";
import { ContactFields } from "../growers/contact-fields.tsx";
import { ContactTable } from "../growers/contacts.tsx";
import { PhoneLink } from "./phone-link.tsx";

type CallCardProps = {
	call: Call & { contacts: Contact[] };
	surveyId: string;
	/** Whether answers can be taken now. */
	isOpen: boolean;
	values?: FormValues;
	problems?: Problem[];
};

/** The grower on the line: the number, what was said before, and what comes of it now. */
export function CallCard({ call, surveyId, isOpen, values, problems }: CallCardProps) {
	const { t } = useTranslation("answered");
	const [search] = useSearchParams();
	const name = useGrowerName()(call.name);
	const { operationId, contacts, timeZone } = call;
	const list = new URLSearchParams(search);
	list.delete("call");
	return (
		<div className="mb-8 border-2 border-line p-5">
			<Section
				title={t("calls.with", { name })}
				level={3}
				actions={
					isOpen && (
						<ButtonLink to={href("/desk/surveys/:surveyId/enter/:operationId", { surveyId, operationId })}>
							{t("calls.enter")}
						</ButtonLink>
					)
				}
			>
				<p className="text-lg">
					{call.contactName} <PhoneLink phone={call.phone} />
				</p>
				<p>
					{t("desk:growers.county", { county: call.countyName, state: call.statePostal })},{" "}
					{t(`common:disposition.${call.disposition}`)},{" "}
					{t("calls.speaks", { language: t(`common:language.${call.language}`) })}
				</p>
				{contacts.length > 0 && (
					<div className="mt-4">
						<ContactTable contacts={contacts} timeZone={timeZone} />
					</div>
				)}
				<Form method="post" noValidate className="mt-5">
					<ContactFields values={values} problems={problems} />
					<div className="flex flex-wrap items-center gap-4">
						<Button>{t("growers:contact.save")}</Button>
						<Link to={`?${list}`} className="inline-flex min-h-11 items-center">
							{t("calls.back")}
						</Link>
						<Link
							to={href("/desk/surveys/:surveyId/paper/:operationId?", { surveyId, operationId })}
							className="inline-flex min-h-11 items-center"
						>
							{t("paper.one")}
						</Link>
						<GrowerLink operationId={operationId} className="inline-flex min-h-11 items-center" onlyAsLink>
							{t("calls.toGrower")}
						</GrowerLink>
					</div>
				</Form>
			</Section>
		</div>
	);
}
