/** What stands still in the scene: the frame's rods, the ruled floor, the shadow it takes, the exits. */
import { BoxGeometry, BufferGeometry, Float32BufferAttribute, Group, type LineBasicMaterial, LineSegments, Mesh, type Material, type MeshLambertMaterial, PlaneGeometry, type ShadowMaterial, SphereGeometry, Vector3 } from 'three';
import type { RigFile } from '@shared/rig/rig-file';

/** The twelve edges of the frame as thin rods: bodies show which is in front, hair lines do not. */
export function makeFrame({ frame }: RigFile, material: Material): Group {
  const group = new Group();
  const min = new Vector3().fromArray(frame.min);
  const max = new Vector3().fromArray(frame.max);
  const size = max.clone().sub(min);
  const middle = min.clone().add(max).multiplyScalar(0.5);
  const thick = Math.max(size.x, size.y, size.z) * 0.0055;
  const corner = (axis: 'x' | 'y' | 'z', high: boolean) => (high ? max[axis] : min[axis]);
  const axes = ['x', 'y', 'z'] as const;
  for (const axis of axes) {
    const [u, v] = axes.filter((other) => other !== axis) as ['x' | 'y' | 'z', 'x' | 'y' | 'z'];
    for (const highU of [false, true]) {
      for (const highV of [false, true]) {
        const extents = new Vector3(thick, thick, thick);
        extents[axis] = size[axis] + thick;
        const rod = new Mesh(new BoxGeometry(extents.x, extents.y, extents.z), material);
        rod.position.copy(middle);
        rod.position[u] = corner(u, highU);
        rod.position[v] = corner(v, highV);
        group.add(rod);
      }
    }
  }
  return group;
}

/** Lines every 5 cm, a stronger one every 10 cm is not needed: the frame gives the measure. */
export function makeFloor({ frame }: RigFile, line: LineBasicMaterial, shadow: ShadowMaterial): Group {
  const group = new Group();
  const z = frame.min[2];
  const points: number[] = [];
  const step = 0.05;
  for (let x = Math.ceil(frame.min[0] / step) * step; x <= frame.max[0] + 1e-9; x += step) points.push(x, frame.min[1], z, x, frame.max[1], z);
  for (let y = Math.ceil(frame.min[1] / step) * step; y <= frame.max[1] + 1e-9; y += step) points.push(frame.min[0], y, z, frame.max[0], y, z);
  const grid = new BufferGeometry();
  grid.setAttribute('position', new Float32BufferAttribute(points, 3));
  group.add(new LineSegments(grid, line));
  const plane = new Mesh(new PlaneGeometry(frame.max[0] - frame.min[0], frame.max[1] - frame.min[1]), shadow);
  plane.position.set((frame.min[0] + frame.max[0]) / 2, (frame.min[1] + frame.max[1]) / 2, z - 0.001);
  plane.receiveShadow = true;
  group.add(plane);
  return group;
}

/** A ball where each cable leaves the frame. */
export function makeExits({ cables }: RigFile, material: MeshLambertMaterial): Group {
  const group = new Group();
  const ball = new SphereGeometry(0.0095, 18, 12);
  for (const { exit } of cables) {
    const mesh = new Mesh(ball, material);
    mesh.position.fromArray(exit);
    mesh.castShadow = true;
    group.add(mesh);
  }
  return group;
}
