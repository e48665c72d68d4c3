import { changePassword } from '$lib/server/auth/accounts';
import { requireUser } from '$lib/server/auth/member';
import { passwordSchema } from '$lib/server/auth/password';
import { answerForm, readForm, refuseForm } from '../form-answer';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
  const { name, email } = requireUser(locals);
  return { crumb: [{ label: 'Labs', href: '/labs' }, { label: 'Account' }], account: { name, email } };
};

export const actions: Actions = {
  default: async (event) => {
    const user = requireUser(event.locals);
    const typed = await readForm(event.request);
    const next = typed.newPassword ?? '';
    const judged = passwordSchema.safeParse(next);
    if (!judged.success)
      return refuseForm(typed, [
        {
          path: 'newPassword',
          message: `Expected ${judged.error.issues[0]!.message}; this one has ${next.length}.`
        }
      ]);
    return answerForm(typed, async () => {
      await changePassword(
        event.locals.db,
        user.id,
        { present: typed.present ?? '', next },
        { sessionId: event.locals.session?.id ?? null, address: event.getClientAddress() }
      );
      return { done: 'Your password was changed, and your sessions in other browsers were ended.' };
    });
  }
};
