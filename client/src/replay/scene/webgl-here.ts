/** What the browser can draw with: a graphics card, the processor alone, or nothing in three dimensions. */
export type WebglHere = 'hardware' | 'software' | 'none';

let known: WebglHere | null = null;

export function webglHere(): WebglHere {
  known ??= look();
  return known;
}

function look(): WebglHere {
  try {
    const context = document.createElement('canvas').getContext('webgl2');
    if (!context) return 'none';
    const info = context.getExtension('WEBGL_debug_renderer_info');
    const renderer = info ? String(context.getParameter(info.UNMASKED_RENDERER_WEBGL)) : '';
    context.getExtension('WEBGL_lose_context')?.loseContext();
    return /swiftshader|llvmpipe|software|basic render/i.test(renderer) ? 'software' : 'hardware';
  } catch {
    return 'none';
  }
}
