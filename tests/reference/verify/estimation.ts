import { comparing } from "#tests/reference/checking.ts";
import type { Checker } from "#tests/reference/verify/checker.ts";
import { checkAllocation } from "#tests/reference/estimation/allocation.ts";
import { checkCalendar } from "#tests/reference/estimation/calendar.ts";
import { checkWeights } from "#tests/reference/estimation/calibrations.ts";
import { checkChange } from "#tests/reference/estimation/change.ts";
import { checkDays } from "#tests/reference/estimation/days.ts";
import { checkLoneRespondents } from "#tests/reference/estimation/lone.ts";
import { checkPublished } from "#tests/reference/estimation/published.ts";
import { checkNamedFigures } from "#tests/reference/estimation/schools.ts";
import { checkResponseRates } from "#tests/reference/estimation/response-rates.ts";
import {
	checkRatioBounds,
	checkRatioEffects,
	checkRobustScores,
	checkUnitSlips,
} from "#tests/reference/estimation/review.ts";
import { checkSimulation } from "#tests/reference/estimation/simulation.ts";
import { checkSeasons } from "#tests/reference/estimation/seasons.ts";
import {
	checkSyntheticDomains,
	checkSyntheticFigures,
	checkSyntheticStrata,
} from "#tests/reference/estimation/synthetic.ts";

/** Design-based estimation, change between seasons, the arithmetic of review, and where to ask on. */
export const checkers: Checker[] = [
	comparing(/^api_lonely_expected\.json$/, checkLoneRespondents),
	comparing(/^api_srs_weights\.csv$/, checkWeights),
	comparing(/^api_(?!lonely).*_expected\.json$/, checkNamedFigures),
	comparing(/^published_values\.json$/, checkPublished),
	comparing(/^synthetic_strata\.csv$/, checkSyntheticStrata),
	comparing(/^synthetic_domains_expected\.csv$/, checkSyntheticDomains),
	comparing(/^synthetic_expected\.json$/, checkSyntheticFigures),
	comparing(/^change_expected\.csv$/, checkChange),
	comparing(/^change_montecarlo\.json$/, checkSimulation),
	comparing(/^change_mean5_expected\.json$/, checkSeasons),
	comparing(/^allocation_expected\.csv$/, checkAllocation),
	comparing(/^review_hb_effects\.csv$/, checkRatioEffects),
	comparing(/^review_hb_expected\.csv$/, checkRatioBounds),
	comparing(/^review_z_expected\.csv$/, checkRobustScores),
	comparing(/^review_unit_slip\.csv$/, checkUnitSlips),
	comparing(/^response-rates\.md$/, checkResponseRates),
	comparing(/^days_calendar\.csv$/, checkCalendar),
	comparing(/^days_expected\.csv$/, checkDays),
];
