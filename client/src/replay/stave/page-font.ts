/** The product's face on canvas; figures there are tabular by Manrope's own default widths. */
export const font = (sizePx: number, weight: 400 | 500 | 600 | 700 | 800 = 500): string => `${weight} ${sizePx}px "Manrope Variable", ui-sans-serif, system-ui, sans-serif`;
