/** Who is asking, as narrow as the work needs. Query functions take one of these and narrow by it. */
export type Person = { personId: string; displayName: string; email: string | null; language: "en" | "es" | null };
export type Associate = Person & { role: "associate"; stateFips: string[] };
export type Coordinator = Person & { role: "coordinator" };
export type Researcher = Person & { role: "researcher" };
/** Somebody answering for operations: signed in, or by a personal link (then one operation and one survey). */
export type Grower = {
	role: "grower";
	operationIds: string[];
	/** Set when a personal link opened the session: no contact data, no past seasons, this survey only. */
	link: { personalLinkId: string; surveyId: string; operationId: string } | null;
	person: Person | null;
};
export type Grants = { coordinator: boolean; researcher: boolean; stateFips: string[]; operationIds: string[] };
