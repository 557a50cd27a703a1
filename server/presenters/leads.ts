/** A track by which a site is entered or left. */
export interface Lead {
  name: string;
  equipped: boolean;
}

/** The leads of a site from the JSON that its row keeps. */
export const leadsOf = (json: string): Lead[] => JSON.parse(json) as Lead[];

/** Names of the leads where no reader stands, so that who goes over them is not seen. */
export const unseenLeads = (json: string | null): string[] =>
  leadsOf(json ?? '[]').flatMap(({ name, equipped }) => (equipped ? [] : [name]));
