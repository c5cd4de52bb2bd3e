import enAnswered from "#locales/en/answered.json" with { type: "json" };
import enChecks from "#locales/en/checks.json" with { type: "json" };
import enCommon from "#locales/en/common.json" with { type: "json" };
import enDataroom from "#locales/en/dataroom.json" with { type: "json" };
import enDesk from "#locales/en/desk.json" with { type: "json" };
import enDistricts from "#locales/en/districts.json" with { type: "json" };
import enForms from "#locales/en/forms.json" with { type: "json" };
import enGrower from "#locales/en/grower.json" with { type: "json" };
import enGrowers from "#locales/en/growers.json" with { type: "json" };
import enMail from "#locales/en/mail.json" with { type: "json" };
import enNetwork from "#locales/en/network.json" with { type: "json" };
import enOrchard from "#locales/en/orchard.json" with { type: "json" };
import enPublic from "#locales/en/public.json" with { type: "json" };
import enRelease from "#locales/en/release.json" with { type: "json" };
import enReport from "#locales/en/report.json" with { type: "json" };
import enSite from "#locales/en/site.json" with { type: "json" };
import esAnswered from "#locales/es/answered.json" with { type: "json" };
import esChecks from "#locales/es/checks.json" with { type: "json" };
import esCommon from "#locales/es/common.json" with { type: "json" };
import esDataroom from "#locales/es/dataroom.json" with { type: "json" };
import esDesk from "#locales/es/desk.json" with { type: "json" };
import esDistricts from "#locales/es/districts.json" with { type: "json" };
import esForms from "#locales/es/forms.json" with { type: "json" };
import esGrower from "#locales/es/grower.json" with { type: "json" };
import esGrowers from "#locales/es/growers.json" with { type: "json" };
import esMail from "#locales/es/mail.json" with { type: "json" };
import esNetwork from "#locales/es/network.json" with { type: "json" };
import esOrchard from "#locales/es/orchard.json" with { type: "json" };
import esPublic from "#locales/es/public.json" with { type: "json" };
import esRelease from "#locales/es/release.json" with { type: "json" };
import esReport from "#locales/es/report.json" with { type: "json" };
import esSite from "#locales/es/site.json" with { type: "json" };

/** All words of the product, for the server. A browser loads one language only (`load-language.client.ts`). */
export const resources = {
	en: {
		answered: enAnswered,
		checks: enChecks,
		common: enCommon,
		dataroom: enDataroom,
		desk: enDesk,
		districts: enDistricts,
		forms: enForms,
		grower: enGrower,
		growers: enGrowers,
		mail: enMail,
		network: enNetwork,
		orchard: enOrchard,
		public: enPublic,
		release: enRelease,
		report: enReport,
		site: enSite,
	},
	es: {
		answered: esAnswered,
		checks: esChecks,
		common: esCommon,
		dataroom: esDataroom,
		desk: esDesk,
		districts: esDistricts,
		forms: esForms,
		grower: esGrower,
		growers: esGrowers,
		mail: esMail,
		network: esNetwork,
		orchard: esOrchard,
		public: esPublic,
		release: esRelease,
		report: esReport,
		site: esSite,
	},
};
