import { Injectable, Injector, inject } from '@angular/core';

/** Opens the list of shortcuts; its code is loaded when it is asked for. */
@Injectable({ providedIn: 'root' })
export class ShortcutList {
  private readonly injector = inject(Injector);

  async open(): Promise<void> {
    const [{ MatDialog }, { ShortcutDialog }] = await Promise.all([
      import('@angular/material/dialog'),
      import('./shortcut-dialog'),
    ]);
    this.injector.get(MatDialog).open(ShortcutDialog, { width: '460px' });
  }
}
