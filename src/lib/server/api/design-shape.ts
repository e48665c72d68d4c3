import { z } from 'zod';

const named = z.object({ name: z.string(), value: z.number().nullable() });
const column = z.object({ name: z.string(), values: z.array(z.number()) });

export const designShape = z.object({
  tr: z.number(),
  volumes: z.number().int(),
  sampling: z.array(z.number()),
  regressors: z.array(column),
  nuisance: z.array(column),
  contrasts: z.array(
    z.object({
      name: z.string(),
      weights: z.array(z.number()),
      estimable: z.boolean(),
      efficiency: z.number(),
      confounded: z.array(z.string())
    })
  ),
  vif: z.array(named),
  vifConditions: z.array(named),
  correlations: z.array(z.array(z.number().nullable())),
  condition: z.number().nullable(),
  notices: z.array(
    z.object({
      id: z.string(),
      level: z.enum(['red', 'amber']),
      title: z.string(),
      reason: z.string(),
      figure: z.string(),
      spot: z.looseObject({ at: z.string() })
    })
  )
});

export const importShape = z.object({
  saveNumber: z.number().int(),
  run: z.string(),
  report: z.object({
    trials: z.number().int(),
    conditions: z.array(z.object({ name: z.string(), trials: z.number().int(), made: z.boolean() })),
    skipped: z.array(z.object({ line: z.number().int(), reason: z.string() })),
    warnings: z.array(z.string()),
    unusedColumns: z.array(z.string())
  })
});
