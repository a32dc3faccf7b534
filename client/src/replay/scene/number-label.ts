/** A small number that always faces the reader and keeps its size: cable numbers at the exits. */
import { CanvasTexture, LinearFilter, Sprite, SpriteMaterial, SRGBColorSpace } from 'three';
import { font } from '../stave/page-font';

export interface NumberLabel {
  readonly sprite: Sprite;
  setColours(ink: string, paper: string): void;
  dispose(): void;
}

const SIDE = 64;

export function makeNumberLabel(text: string): NumberLabel {
  const canvas = document.createElement('canvas');
  canvas.width = SIDE;
  canvas.height = SIDE;
  const texture = new CanvasTexture(canvas);
  texture.colorSpace = SRGBColorSpace;
  texture.minFilter = LinearFilter;
  texture.generateMipmaps = false;
  const material = new SpriteMaterial({ map: texture, transparent: true, depthTest: false, sizeAttenuation: false, fog: false });
  const sprite = new Sprite(material);
  sprite.scale.setScalar(0.036);
  sprite.renderOrder = 10;
  return {
    sprite,
    setColours(ink, paper) {
      const context = canvas.getContext('2d');
      if (!context) return;
      context.clearRect(0, 0, SIDE, SIDE);
      context.font = font(34, 800);
      context.textAlign = 'center';
      context.textBaseline = 'middle';
      context.lineJoin = 'round';
      context.lineWidth = 9;
      context.strokeStyle = paper;
      context.strokeText(text, SIDE / 2, SIDE / 2 + 2);
      context.fillStyle = ink;
      context.fillText(text, SIDE / 2, SIDE / 2 + 2);
      texture.needsUpdate = true;
    },
    dispose() {
      texture.dispose();
      material.dispose();
    },
  };
}
