import { DOCUMENT } from '@angular/common';
import { DestroyRef, Injectable, computed, inject, signal } from '@angular/core';

export interface Shortcut {
  /** One key as KeyboardEvent.key gives it, or two in a row: "?", "g m". With "Mod+": Ctrl, or Command on a Mac. */
  readonly keys: string;
  readonly does: string;
  readonly where: string;
  readonly run: () => void;
}

const storageKey = 'tallystone.shortcuts';
const sequenceMs = 1200;

/**
 * Keyboard shortcuts, registered by whatever is on the screen and listed under `?`. Single keys can be switched off in the account
 * (WCAG 2.2, 2.1.4 Character Key Shortcuts); they never act while someone types in a field.
 */
@Injectable({ providedIn: 'root' })
export class Shortcuts {
  private readonly document = inject(DOCUMENT);
  private readonly registered = signal<readonly Shortcut[]>([]);
  private pending: { key: string; at: number } | null = null;

  readonly list = this.registered.asReadonly();
  readonly enabled = signal(this.remembered());
  readonly places = computed(() => [...new Set(this.registered().map((shortcut) => shortcut.where))]);

  start(): void {
    this.document.addEventListener('keydown', (event) => this.press(event));
  }

  setEnabled(enabled: boolean): void {
    this.enabled.set(enabled);
    try {
      localStorage.setItem(storageKey, enabled ? 'on' : 'off');
    } catch {
      // lasts for this visit only
    }
  }

  /** Registers shortcuts for as long as the caller's injection context lives. */
  add(...shortcuts: readonly Shortcut[]): void {
    this.registered.update((list) => [...list, ...shortcuts]);
    inject(DestroyRef).onDestroy(() => this.registered.update((list) => list.filter((entry) => !shortcuts.includes(entry))));
  }

  private press(event: KeyboardEvent): void {
    if (event.defaultPrevented || event.altKey || isTyping(event.target)) return;
    const mod = event.ctrlKey || event.metaKey;
    const key = mod ? `Mod+${event.shiftKey ? 'Shift+' : ''}${event.key.toLowerCase()}` : event.key;
    if (!mod && !this.enabled()) return;
    const before = this.pending && event.timeStamp - this.pending.at < sequenceMs ? `${this.pending.key} ` : '';
    this.pending = mod ? null : { key, at: event.timeStamp };
    const match = this.find(before + key) ?? this.find(key);
    if (!match) return;
    if (this.document.querySelector('mat-dialog-container')) return;
    this.pending = null;
    event.preventDefault();
    match.run();
  }

  private find(keys: string): Shortcut | undefined {
    // The latest registered wins: a page's own shortcut goes before the frame's.
    return this.registered().findLast((shortcut) => shortcut.keys === keys);
  }

  private remembered(): boolean {
    try {
      return localStorage.getItem(storageKey) !== 'off';
    } catch {
      return true;
    }
  }
}

function isTyping(target: EventTarget | null): boolean {
  const element = target instanceof HTMLElement ? target : null;
  return element?.closest('input, textarea, select, [contenteditable], mat-select, [role="combobox"]') != null;
}
