import type { Role } from '../../shared/contracts/access.ts';

/** The signed-in person with their roles, loaded at the front door. */
export interface Actor {
  id: number;
  name: string;
  email: string;
  administrator: boolean;
  roles: { siteId: number; role: Role }[];
}

/** Where a request came from; stands in every audit row. */
export interface Origin {
  requestId: string;
  fromAddress: string;
}
