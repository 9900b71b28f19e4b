import { DOCUMENT } from '@angular/common';
import { Injector, createEnvironmentInjector, EnvironmentInjector, runInInjectionContext } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { Shortcuts } from './shortcuts';

function press(key: string, init: KeyboardEventInit = {}, target: EventTarget = document.body): KeyboardEvent {
  const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true, ...init });
  target.dispatchEvent(event);
  return event;
}

describe('Shortcuts', () => {
  let shortcuts: Shortcuts;
  let done: string[];

  beforeEach(() => {
    localStorage.clear();
    done = [];
    shortcuts = TestBed.inject(Shortcuts);
    shortcuts.start();
    const say = (word: string) => () => void done.push(word);
    runInInjectionContext(TestBed.inject(Injector), () =>
      shortcuts.add(
        { keys: '?', does: 'Show the list', where: 'Everywhere', run: say('list') },
        { keys: 'g m', does: 'Go to Models', where: 'Everywhere', run: say('models') },
        { keys: 'Mod+z', does: 'Undo', where: 'Binning', run: say('undo') },
        { keys: 'Mod+Shift+z', does: 'Redo', where: 'Binning', run: say('redo') },
      ),
    );
  });

  it('take single keys, two keys in a row, and combinations', () => {
    press('?');
    press('g');
    press('m');
    press('z', { ctrlKey: true });
    press('Z', { ctrlKey: true, shiftKey: true });
    press('m');
    expect(done).toEqual(['list', 'models', 'undo', 'redo']);
  });

  it('leave typing alone', () => {
    const field = TestBed.inject(DOCUMENT).body.appendChild(document.createElement('input'));
    press('?', {}, field);
    field.remove();
    expect(done).toEqual([]);
  });

  it('can be switched off, but for combinations, and stay so', () => {
    shortcuts.setEnabled(false);
    press('?');
    expect(press('z', { metaKey: true }).defaultPrevented).toBe(true);
    expect(done).toEqual(['undo']);
    expect(localStorage.getItem('tallystone.shortcuts')).toBe('off');
  });

  it('go when what registered them goes', () => {
    const page = createEnvironmentInjector([], TestBed.inject(EnvironmentInjector));
    runInInjectionContext(page, () =>
      shortcuts.add({ keys: 'm', does: 'Merge', where: 'Binning', run: () => void done.push('merge') }),
    );
    press('m');
    page.destroy();
    press('m');
    expect(done).toEqual(['merge']);
    expect(shortcuts.places()).toEqual(['Everywhere', 'Binning']);
  });
});
