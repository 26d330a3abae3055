// Reads a PLY file with @loaders.gl/ply and prints what it holds as JSON.
import {readFileSync} from 'fs';
import {parse} from '@loaders.gl/core';
import {PLYLoader} from '@loaders.gl/ply';

const bytes = readFileSync(process.argv[2]);
const mesh = await parse(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length), PLYLoader, {worker: false});
const position = mesh.attributes.POSITION.value;
const axis = (k, pick) => {
  let best = position[k];
  for (let i = k; i < position.length; i += 3) best = pick(best, position[i]);
  return best;
};
console.log(JSON.stringify({
  count: position.length / 3,
  names: Object.keys(mesh.attributes),
  low: [0, 1, 2].map(k => axis(k, Math.min)),
  high: [0, 1, 2].map(k => axis(k, Math.max)),
}));
