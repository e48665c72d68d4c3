import { describe, expect, it } from 'vitest';
import { designReport } from '$lib/engine/design/report';
import { compileRun, gapsOf } from '$lib/task/compile';
import { designInput } from '$lib/task/model';
import { noticesOf } from '$lib/task/notices';
import { signIn } from '$lib/server/auth/accounts';
import { currentDocument } from '$lib/server/services/documents';
import { createDemoLab } from '$lib/server/services/demo/lab';
import { listMembers } from '$lib/server/services/labs';
import { listProfiles } from '$lib/server/services/profiles';
import { listTasks } from '$lib/server/services/tasks';
import { useDatabase } from './support/database';

const t = useDatabase({ origin: 'http://127.0.0.1:3000' });

describe('the demo lab', () => {
  it('has an account for each role, with a password of its own', async () => {
    const demo = await createDemoLab(t.db);
    const members = await listMembers(t.db, demo.lab);
    expect(demo.accounts.map((a) => a.role)).toEqual(['owner', 'experimenter', 'operator', 'reader']);
    expect(new Set(demo.accounts.map((a) => a.password)).size).toBe(4);
    for (const { role, email, password } of demo.accounts) {
      expect(email).toMatch(/@marram\.example$/);
      const user = await signIn(t.db, { email, password }, '127.0.0.1');
      expect(members.find((m) => m.id === user.id)?.role).toBe(role);
    }
  });

  it('opened again, gets accounts and data of its own', async () => {
    const again = await createDemoLab(t.db);
    expect(again.accounts[0]!.email).toBe('owner-2@marram.example');
  });

  it('holds two tasks whose runs are jittered, fit their volumes, and give no notice', async () => {
    const demo = await createDemoLab(t.db);
    const [stored] = await listProfiles(t.db, demo.lab);
    const tasks = await listTasks(t.db, demo.lab, demo.study);
    expect(tasks.map((task) => task.name)).toEqual(['Chime and Lantern', 'Press localiser']);
    for (const { id } of tasks) {
      const { document } = await currentDocument(t.db, demo.lab, id);
      expect(document.brief.tr).toBe(1_500_000);
      for (const run of document.runs) {
        const report = designReport(designInput(document, run, stored!.profile));
        for (const contrast of report.contrasts) expect(contrast.efficiency).toBeGreaterThan(0.5);
        expect(noticesOf(document, run, stored!.profile, report.contrasts)).toEqual([]);
        const gaps = gapsOf(compileRun(document, run).trials);
        expect(new Set(gaps).size).toBeGreaterThan(4);
        expect(Math.min(...gaps)).toBeGreaterThanOrEqual(1_500_000);
      }
    }
  });

  it('gives Chime and Lantern two different runs of 300 volumes, the same on every machine', async () => {
    const demo = await createDemoLab(t.db);
    const { document } = await currentDocument(t.db, demo.lab, demo.task);
    expect(document.brief.conditions.map((c) => c.name)).toEqual([
      'follow-lantern',
      'follow-chime',
      'follow-both'
    ]);
    expect(document.runs.map((r) => [r.volumes, r.trials.length])).toEqual([
      [300, 60],
      [300, 60]
    ]);
    const onsets = document.runs.map((r) => r.trials.map((x) => x.onset).join());
    expect(onsets[0]).not.toBe(onsets[1]);
    const other = await createDemoLab(t.db);
    const again = (await currentDocument(t.db, other.lab, other.task)).document;
    expect(again.runs.map((r) => r.trials.map((x) => x.onset).join())).toEqual(onsets);
    const kinds = new Set(document.cards.flatMap((c) => c.items.map((i) => i.kind)));
    expect([...kinds].sort()).toEqual(['fixation', 'shape', 'sound', 'text']);
  });
});
