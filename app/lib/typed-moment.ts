/** A calendar day as a form's field sends it, `2026-12-24`; whether there is such a day is found out when it is read. */
export const typedDay = /^\d{4}-\d{2}-\d{2}$/;
/** A time of the day as a form's field sends it, `17:00`; a browser without a field for times also sends `9:00`. */
export const typedClock = /^([01]?\d|2[0-3]):[0-5]\d$/;
