/** Accessibility findings of the open page, by axe-core inside the real browser. */
import { createRequire } from 'node:module';
import { readFileSync } from 'node:fs';
import type { AxeResults } from 'axe-core';
import type { Page } from 'playwright-core';

const source = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

/** Serious and critical findings as lines that say where and what. */
export async function seriousFindings(page: Page): Promise<string[]> {
  await page.evaluate(source);
  const results = await page.evaluate<AxeResults>('axe.run(document, { resultTypes: ["violations"] })');
  return results.violations
    .filter((violation) => violation.impact === 'serious' || violation.impact === 'critical')
    .flatMap((violation) => violation.nodes.map((node) => `${violation.id}: ${node.target.join(' ')}: ${node.failureSummary ?? ''}`));
}
