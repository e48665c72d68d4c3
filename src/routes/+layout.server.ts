import type { LayoutServerLoad } from './$types';

/** Who is signed in, for the frame. This guards nothing: each page asks for its own rights. */
export const load: LayoutServerLoad = ({ locals }) => ({
  user: locals.user ? { name: locals.user.name, email: locals.user.email } : null
});
