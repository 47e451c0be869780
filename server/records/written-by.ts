import { sql } from 'kysely';

/** The name of the person joined as `user`; what nobody wrote down, such as demo data, is Steadfall's. */
export const writtenBy = sql<string>`coalesce(user.name, 'Steadfall')`.as('by');
