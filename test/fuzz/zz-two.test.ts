import { it } from 'vitest';
import { readFileSync } from 'node:fs';
import { analyseText } from '../whole/analyse-text.ts';
it('x', async () => {
 const d=process.env.D!;
 const { network: n, chip } = await analyseText(readFileSync(d+'/chip.svg','utf8'), readFileSync(d+'/chip.run.yaml','utf8'));
 const p = n.trace.near.pieces; 
 for (let c=0;c<p.centrelineCount;c++) console.log('centreline', c, chip.channels[p.centrelineChannel[c]].name, p.centrelineLength[c], p.centrelineClosed[c], Array.from({length:Math.min(8,p.firstPiece[c+1]-p.firstPiece[c])},(_,i)=>{const k=p.firstPiece[c]+i; return [p.x1[k],p.y1[k],p.x2[k],p.y2[k],p.length[k],p.start[k]].join(',')}));
 for (let s=0;s<n.segmentCount;s++) if ([n.segmentX1[s],n.segmentX2[s],n.segmentY1[s],n.segmentY2[s]].some(Number.isNaN)) console.log(s, n.segmentName(s), n.segmentX1[s],n.segmentY1[s],n.segmentX2[s],n.segmentY2[s], n.segmentDuctMm[s]);
});
