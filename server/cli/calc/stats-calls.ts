import {
  blandAltman,
  cohenKappa,
  holm,
  intraclassCorrelation,
  pairedTTest,
  wilcoxonSignedRank,
  williamsSquare,
} from '@shared/stats';
import { z } from 'zod';
import { defineCall, numbers, rows } from './call';

const pairs = z.object({ a: numbers, b: numbers });

export const statsCalls = {
  'stats.pairedT': defineCall(pairs, ({ a, b }) => pairedTTest(a, b)),

  'stats.wilcoxon': defineCall(
    z.object({ d: numbers, method: z.enum(['exact', 'normal']).optional(), continuityCorrection: z.boolean().optional() }),
    ({ d, method, continuityCorrection }) => wilcoxonSignedRank(d, { method, continuityCorrection }),
  ),

  'stats.kappa': defineCall(z.object({ table: rows }), ({ table }) => {
    const plain = cohenKappa(table);
    const linear = cohenKappa(table, 'linear');
    const quadratic = cohenKappa(table, 'quadratic');
    return {
      n: plain.n,
      po: plain.po,
      pe: plain.pe,
      kappa: plain.kappa,
      ci95: plain.interval,
      kappaLinear: linear.kappa,
      ci95Linear: linear.interval,
      kappaQuadratic: quadratic.kappa,
      ci95Quadratic: quadratic.interval,
    };
  }),

  'stats.icc': defineCall(z.object({ ratings: rows }), ({ ratings }) => intraclassCorrelation(ratings)),

  'stats.blandAltman': defineCall(pairs, ({ a, b }) => blandAltman(a, b)),

  'stats.holm': defineCall(z.object({ p: numbers }), ({ p }) => ({ adjusted: holm(p) })),

  'design.williams': defineCall(z.object({ n: z.number() }), ({ n }) => ({ rows: williamsSquare(n) })),
};
