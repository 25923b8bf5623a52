import type uPlot from 'uplot';

const HATCH_STEP = 7;
const HATCH_DEPTH = 7;

/** Draws each limit as a line with a hatch on its forbidden side, so that it reads without colour. */
export function drawLimits(plot: uPlot, limits: readonly number[], colour: string): void {
  const { ctx, bbox } = plot;
  const scale = devicePixelRatio;
  ctx.save();
  ctx.beginPath();
  ctx.rect(bbox.left, bbox.top, bbox.width, bbox.height);
  ctx.clip();
  ctx.strokeStyle = colour;
  for (const limit of limits) {
    const y = plot.valToPos(limit, 'y', true);
    if (y < bbox.top - 1 || y > bbox.top + bbox.height + 1) continue;
    const away = (limit > 0 ? -1 : 1) * HATCH_DEPTH * scale;
    ctx.lineWidth = 1.5 * scale;
    ctx.beginPath();
    ctx.moveTo(bbox.left, y);
    ctx.lineTo(bbox.left + bbox.width, y);
    ctx.stroke();
    ctx.lineWidth = 0.75 * scale;
    ctx.beginPath();
    for (let x = bbox.left; x < bbox.left + bbox.width; x += HATCH_STEP * scale) {
      ctx.moveTo(x, y);
      ctx.lineTo(x + HATCH_DEPTH * scale, y + away);
    }
    ctx.stroke();
  }
  ctx.restore();
}
