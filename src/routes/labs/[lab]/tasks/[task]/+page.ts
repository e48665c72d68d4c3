import { redirect } from '@sveltejs/kit';
import type { PageLoad } from './$types';

/** A task's address without a part opens the Page. */
export const load: PageLoad = ({ params }) => redirect(307, `/labs/${params.lab}/tasks/${params.task}/page`);
