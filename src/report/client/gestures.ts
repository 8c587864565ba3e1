import { toPlane, type MapView, type Place } from '../charts/map-view.js';

/**
 * Fingers and mouse on the map. One that starts on a track moves the cursor along it; elsewhere it moves the sheet; two
 * fingers zoom; a tap puts the cursor on the track under it. Up and down swipes stay with the page.
 */
export interface MapHands {
  readonly view: () => MapView;
  readonly move: (view: MapView) => void;
  /** Cursor to the track near a place; false when none is near. */
  readonly put: (place: Place, tolerance: number) => boolean;
}

interface Hold {
  x: number;
  y: number;
}

export function mountGestures(svg: SVGSVGElement, hands: MapHands): void {
  const held = new Map<number, Hold>();
  let mode: 'scrub' | 'pan' | 'pinch' | null = null;
  const onSheet = (event: { clientX: number; clientY: number }): Hold => {
    const box = svg.getBoundingClientRect();
    const unit = hands.view().width / box.width;
    return { x: (event.clientX - box.left) * unit, y: (event.clientY - box.top) * unit };
  };
  const reach = (event: PointerEvent): number => (event.pointerType === 'mouse' ? 12 : 26) / hands.view().scale;
  const put = (event: PointerEvent, metres: number): boolean => {
    const at = onSheet(event);
    return hands.put(toPlane(hands.view(), at.x, at.y), metres);
  };
  svg.addEventListener('pointerdown', (event) => {
    held.set(event.pointerId, onSheet(event));
    svg.setPointerCapture(event.pointerId);
    mode = held.size > 1 ? 'pinch' : put(event, reach(event)) ? 'scrub' : 'pan';
  });
  svg.addEventListener('pointermove', (event) => {
    const before = held.get(event.pointerId);
    if (!before) return;
    const now = onSheet(event);
    if (mode === 'scrub') put(event, 8 * reach(event));
    else
      hands.move(
        mode === 'pinch' ? pinched(hands.view(), held, event.pointerId, now) : panned(hands.view(), before, now),
      );
    held.set(event.pointerId, now);
  });
  const release = (event: PointerEvent): void => {
    held.delete(event.pointerId);
    mode = held.size > 0 ? 'pan' : null;
  };
  svg.addEventListener('pointerup', release);
  svg.addEventListener('pointercancel', release);
  svg.addEventListener(
    'wheel',
    (event) => {
      if (!event.ctrlKey && !event.metaKey) return;
      event.preventDefault();
      hands.move(zoomed(hands.view(), onSheet(event), Math.exp(-event.deltaY / 300)));
    },
    { passive: false },
  );
}

function panned(view: MapView, from: Hold, to: Hold): MapView {
  const middle = toPlane(view, view.width / 2 - (to.x - from.x), view.height / 2 - (to.y - from.y));
  return { ...view, cx: middle.x, cy: middle.y };
}

/** The place under the point stays under it. */
export function zoomed(view: MapView, at: Hold, factor: number): MapView {
  const fixed = toPlane(view, at.x, at.y);
  const wide = { ...view, scale: view.scale * factor };
  const moved = toPlane(wide, at.x, at.y);
  return { ...wide, cx: wide.cx + fixed.x - moved.x, cy: wide.cy + fixed.y - moved.y };
}

function pinched(view: MapView, held: ReadonlyMap<number, Hold>, id: number, now: Hold): MapView {
  const before = held.get(id)!;
  const other = [...held].find(([key]) => key !== id)?.[1];
  if (!other) return view;
  const ratio =
    Math.hypot(now.x - other.x, now.y - other.y) / Math.max(10, Math.hypot(before.x - other.x, before.y - other.y));
  const middle = { x: (now.x + other.x) / 2, y: (now.y + other.y) / 2 };
  return panned(zoomed(view, middle, ratio), { x: before.x / 2, y: before.y / 2 }, { x: now.x / 2, y: now.y / 2 });
}
