/**
 * Whether the next heading that appears was turned to by the reader. The shell marks a turn when the path changes;
 * the first heading after it takes the mark. The opening of the first page is no turn: the browser reads it anyway.
 */
let turned = false;

export const pageTurns = {
  mark(): void {
    turned = true;
  },
  take(): boolean {
    const was = turned;
    turned = false;
    return was;
  },
};
