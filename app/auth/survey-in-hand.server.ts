import { createContext, type MiddlewareFunction } from "react-router";
import { z } from "zod";

/** The survey that a request's address names, or null. */
export const surveyInHandContext = createContext<string | null>(null);

export const surveyInHandMiddleware: MiddlewareFunction<Response> = ({ context, params }, next) => {
	const surveyId = z.guid().safeParse(params.surveyId);
	if (surveyId.success) context.set(surveyInHandContext, surveyId.data);
	return next();
};
