/// <reference lib="dom" />

/** A pointer's place in a drawing, pt. */
export interface PlacedPointer {
  readonly x: number;
  readonly y: number;
}

/** What a view does when it is pointed at. */
export interface PointerActions {
  /** Size of the drawing, pt. */
  readonly size: { readonly width: number; readonly height: number };
  readonly move: (at: PlacedPointer) => void;
  readonly leave: () => void;
  readonly press: (at: PlacedPointer) => void;
  /** Arrow keys, in steps: right and up are positive. */
  readonly step: (dx: number, dy: number) => void;
  /** Escape. */
  readonly clear: () => void;
}

const arrows: Readonly<Record<string, readonly [number, number]>> = {
  ArrowLeft: [-1, 0],
  ArrowRight: [1, 0],
  ArrowDown: [0, -1],
  ArrowUp: [0, 1],
};

/** Lets a view be pointed at by mouse, finger and keyboard. */
export function bindPointer(view: HTMLElement, actions: PointerActions): void {
  const { size } = actions;
  const stage = view.querySelector<HTMLElement>(".stage")!;
  const place = (event: PointerEvent): PlacedPointer => {
    const box = stage.getBoundingClientRect();
    return {
      x: (event.clientX - box.left) / box.width * size.width,
      y: (event.clientY - box.top) / box.height * size.height,
    };
  };
  let latest: PointerEvent | null = null;
  stage.addEventListener("pointermove", (event) => {
    // At most one drawing per frame of the screen.
    if (latest === null) {
      requestAnimationFrame(() => {
        const seen = latest;
        latest = null;
        if (seen) actions.move(place(seen));
      });
    }
    latest = event;
  });
  stage.addEventListener("pointerleave", () => {
    latest = null;
    actions.leave();
  });
  stage.addEventListener("click", (event) => actions.press(place(event as PointerEvent)));
  view.addEventListener("keydown", (event) => {
    const arrow = arrows[event.key];
    if (arrow) {
      const times = event.shiftKey ? 10 : 1;
      actions.step(arrow[0] * times, arrow[1] * times);
      event.preventDefault();
    } else if (event.key === "Escape") {
      actions.clear();
      event.preventDefault();
    }
  });
}
