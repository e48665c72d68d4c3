import { loadTask } from '$lib/server/services/workspace';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = async ({ locals, params }) => {
  const { lab, study, ...rest } = await loadTask(locals, params.lab, params.task);
  return {
    ...rest,
    lab,
    study,
    userId: locals.user?.id ?? '',
    crumb: [
      { label: lab.name, href: `/labs/${lab.id}` },
      { label: study.name, href: `/labs/${lab.id}/studies/${study.id}` },
      { label: rest.task.document.brief.title }
    ]
  };
};
