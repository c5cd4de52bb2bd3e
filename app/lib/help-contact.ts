/** Whom a reader turns to, the same on every page. The network's own, as its name is. */
export const helpContact = { email: "help@fourrivers.example", phone: "608 555 0142", phoneUri: "tel:+16085550142" };
