import { Injectable, effect, inject, signal } from '@angular/core';
import { DOCUMENT } from '@angular/common';

export type ThemeChoice = 'light' | 'dark' | 'system';

const key = 'tallystone.theme';
const choices: readonly string[] = ['light', 'dark', 'system'];

/** Light, dark, or as the system has it; the choice stays with this browser. */
@Injectable({ providedIn: 'root' })
export class Theme {
  private readonly document = inject(DOCUMENT);
  readonly choice = signal<ThemeChoice>(this.remembered());

  constructor() {
    effect(() => {
      const choice = this.choice();
      const root = this.document.documentElement;
      if (choice === 'system') root.removeAttribute('data-theme');
      else root.setAttribute('data-theme', choice);
    });
  }

  choose(choice: ThemeChoice): void {
    this.choice.set(choice);
    try {
      localStorage.setItem(key, choice);
    } catch {
      // Storage can be barred by the browser; the choice then lasts for this visit.
    }
  }

  private remembered(): ThemeChoice {
    try {
      const kept = localStorage.getItem(key);
      return kept !== null && choices.includes(kept) ? (kept as ThemeChoice) : 'system';
    } catch {
      return 'system';
    }
  }
}
