/** Accessibility findings of the open page, by axe-core inside the real browser. */
import { createRequire } from 'node:module';
import { readFileSync } from 'node:fs';
import type { AxeResults } from 'axe-core';
import type { Page } from 'playwright-core';

const source = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

/**
 * Serious and critical findings as lines that say where and what.
 *
 * @param only rules to ask for; left out: all of them
 */
export async function seriousFindings(page: Page, only?: readonly string[]): Promise<string[]> {
  if (!(await page.evaluate('"axe" in window'))) await page.evaluate(source);
  const options = { resultTypes: ['violations'], ...(only ? { runOnly: only } : {}) };
  const results = await page.evaluate<AxeResults>(`axe.run(document, ${JSON.stringify(options)})`);
  return results.violations
    .filter((violation) => violation.impact === 'serious' || violation.impact === 'critical')
    .flatMap((violation) => violation.nodes.map((node) => `${violation.id}: ${node.target.join(' ')}: ${node.failureSummary ?? ''}`));
}
