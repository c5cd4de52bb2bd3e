/**
 * Who may import whom, as DEVELOPERS.md tells it. A file is judged by the longest `folder` that it lies in and may always
 * import its own folder. `values` are what it may import to run; `types` are what it may besides import as a type.
 */
export type Row = { folder: string; values: string[]; types: string[] };

/** The one-way flow, left to right. */
const flow = ["directory", "collect", "review", "tally", "estimate", "protect", "release", "publish"] as const;
type Stage = (typeof flow)[number];

const stages = flow.map((stage) => `app/${stage}/`);
const leftOf = (stage: Stage) => flow.slice(0, flow.indexOf(stage)).map((left) => `app/${left}/`);
const general = ["app/components/", "app/i18n/", "app/lib/"];
/** Which languages there are: plain data, also of use to what writes texts in both. */
const languages = "app/i18n/language.ts";
/** How a stage's writes are logged; the transaction itself is its caller's. */
const eventLog = "app/auth/event-log.server.ts";

const stage = (name: Stage): Row => ({
	folder: `app/${name}/`,
	values: ["app/lib/", languages, eventLog],
	types: [...leftOf(name), "app/auth/", "db/schema.ts"],
});
/** Nobody asks, nobody is logged: figures from figures. */
const pureStage = (name: Stage): Row => ({
	folder: `app/${name}/`,
	values: ["app/lib/"],
	types: [...leftOf(name), "db/schema.ts"],
});

export const table: Row[] = [
	{ folder: "app/lib/", values: [], types: [] },
	{ folder: "app/i18n/", values: ["app/lib/", "locales/"], types: [] },
	{ folder: "app/components/", values: general, types: stages },
	{ folder: "app/auth/", values: ["app/lib/"], types: ["db/schema.ts"] },
	{ folder: "app/mail/", values: ["app/i18n/", "app/lib/"], types: [] },

	stage("directory"),
	stage("collect"),
	stage("review"),
	pureStage("tally"),
	pureStage("estimate"),
	pureStage("protect"),
	stage("release"),
	// Published figures are read as the reader: no one else's transaction, and not even the type of one.
	{ folder: "app/publish/", values: ["app/lib/", languages], types: ["app/release/"] },
	{
		folder: "app/publish/drafting/",
		values: ["app/publish/", "app/lib/", languages, eventLog],
		types: ["app/auth/", "app/release/"],
	},
	// Who gets a report by mail, which the reader's role knows nothing of.
	{ folder: "app/publish/readership/", values: ["app/lib/", languages], types: ["app/auth/"] },

	{
		folder: "app/jobs/",
		values: [...stages, "app/auth/", "app/mail/", "app/i18n/", "app/lib/"],
		types: [],
	},
	{
		folder: "app/routes/",
		values: ["app/routes/", ...stages, "app/auth/", "app/jobs/", "app/mail/", ...general],
		types: [],
	},
	{ folder: "app/routes/public/", values: ["app/publish/", "app/auth/", ...general], types: [] },
	{ folder: "app/routes/dataroom/", values: ["app/publish/", "app/auth/", ...general], types: [] },
	{ folder: "app/routes/api/v1/", values: ["app/publish/", "app/auth/", ...general], types: [] },
	// root.tsx, routes.ts and the two entries.
	{ folder: "app/", values: ["app/auth/", ...general], types: [] },

	{ folder: "db/migrations/", values: [], types: [] },
	{ folder: "db/seed/", values: ["db/", "app/", "fakes/"], types: [] },
	{ folder: "db/setup/", values: ["fakes/"], types: [] },
	{ folder: "db/", values: [], types: [] },
	{ folder: "fakes/", values: [], types: [] },
];

/** Single imports that the table forbids and a reason allows. One that is no longer made fails the test. */
export const exceptions: { from: string; to: string; because: string }[] = [
	{
		from: "app/auth/scope.server.ts",
		to: "db/connect.ts",
		because: "the one place where the application's own role connects",
	},
	{
		from: "app/publish/reader.server.ts",
		to: "db/connect.ts",
		because: "the one place where the reader's role connects",
	},
	{
		from: "app/publish/reader.server.ts",
		to: "db/schema.ts",
		because: "picks from the tables' types those that the reader can see",
	},
	{
		from: "app/routes/public/sign-in-callback.ts",
		to: "app/auth/scope.server.ts",
		because: "writes who signed in, under scope `none`, which sees no row of directory or collect",
	},
	{
		from: "app/routes/public/language.ts",
		to: "app/auth/scope.server.ts",
		because: "keeps a person's language, under scope `none`",
	},
	{
		from: "app/collect/survey-opening.server.ts",
		to: "app/auth/scope.server.ts",
		because: "a survey's frame can cover states that its opener has no grant for",
	},
	{
		from: "app/collect/editing/form-drafts.server.ts",
		to: "app/auth/scope.server.ts",
		because: "whether a question has answers is asked of every state, and nothing of the answers is told",
	},
	{
		from: "app/collect/own-facts.server.ts",
		to: "app/auth/scope.server.ts",
		because: "which release tells of a survey is asked for a grower, who sees no draft of one",
	},
	{
		from: "app/collect/personal-link.server.ts",
		to: "app/auth/scope.server.ts",
		because: "a link into a rehearsal takes it in hand, since no other transaction sees one",
	},
	{
		from: "app/collect/rehearsal.server.ts",
		to: "app/auth/scope.server.ts",
		because: "who makes a rehearsal has it in hand from there on, since no other transaction sees one",
	},
	{
		from: "app/collect/withdrawal.server.ts",
		to: "app/auth/scope.server.ts",
		because: "whether a release rests on an answer is asked for a grower, who sees no draft of one",
	},
	{
		from: "app/collect/mail-waves.server.ts",
		to: "app/jobs/queue.server.ts",
		because: "mail is queued in the transaction that decides it",
	},
	{
		from: "app/collect/reminders.server.ts",
		to: "app/jobs/queue.server.ts",
		because: "a reminder's alarm is set and moved in the transaction that sets its time",
	},
	{
		from: "app/collect/photo-rows.server.ts",
		to: "app/jobs/queue.server.ts",
		because: "files of photos are erased when the transaction that takes them away has ended well, and only then",
	},
	{
		from: "app/collect/submission.server.ts",
		to: "app/tally/facts.server.ts",
		because: "a submission writes its facts in its own transaction: neither is ever there without the other",
	},
	{
		from: "app/collect/submission.server.ts",
		to: "app/jobs/queue.server.ts",
		because: "looking for odd answers is queued in the transaction that takes them in",
	},
	{
		from: "app/tally/facts.server.ts",
		to: "app/review/corrections.server.ts",
		because: "facts are made of answers as review left them, in the transaction that decides it",
	},
	{
		from: "app/tally/facts.server.ts",
		to: "app/review/reviewed-answers.ts",
		because: "facts are made of answers as review left them",
	},
	{
		from: "app/jobs/worker.ts",
		to: "app/jobs/tasks.server.ts",
		because: "a program of its own, which no page imports",
	},
	{ from: "app/jobs/worker.ts", to: "app/lib/env.server.ts", because: "a program of its own" },
	{ from: "app/jobs/worker.ts", to: "app/lib/log.server.ts", because: "a program of its own" },
	{
		from: "db/reference.ts",
		to: "app/directory/crops.ts",
		because: "the list of crops is code; it is loaded beside the migrations, not by one",
	},
	{ from: "db/reference.ts", to: "app/lib/geography/counties.ts", because: "counties come from the map's own shapes" },
	{
		from: "db/reference.ts",
		to: "app/lib/geography/neighbors.ts",
		because: "neighbours come from the map's own shapes",
	},
	{ from: "db/reference.ts", to: "app/lib/geography/topology.server.ts", because: "the map's own shapes" },
];

/** Files of the reader's side, which reach the database through `app/publish/reader.server.ts` and in no other way. */
export const readersSide = ["app/routes/public/", "app/routes/dataroom/", "app/routes/api/v1/", "app/publish/"];
export const notReadersSide = ["app/publish/drafting/", "app/publish/readership/"];
/** What the reader's side may reach, through however many files. Modules of app/auth ask who is there; the walk ends at them. */
export const readersReach = [...readersSide, ...general];
export const whoIsAsking = "app/auth/";
/** From guards, the reader's side takes those whose transaction sees no row of directory or collect. */
export const guardFile = "app/auth/guard.server.ts";
export const readersGuards = ["requirePerson", "requireResearcher", "dataroomGuard"];

/** Figures only: no server, clock, chance or page, in the files themselves and in all that they import. */
export const pureFolders = ["app/review/", "app/estimate/", "app/protect/"];

/** Files of which the build takes the server's part away, or that no browser is ever given. */
export const holdsServerCode =
	/^app\/(root\.tsx|entry\.server\.tsx|routes\/(?!.*\/parts\/).*)$|\.server\.tsx?$|^(db|fakes)\//;
