import { accessSync, constants, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type BrowserContext, chromium } from 'playwright-core';

const CHROMIUM = '/usr/bin/chromium';

/** Sides of the page's window. */
export const WINDOW_PX = 1600;

/** Debian's Chromium, the oracle for reading SVG. Without it the tests that ask it are skipped by name. */
export const hasChromium = canRun(CHROMIUM);

/** A browser with a profile of its own that talks to no network; `close` takes the profile away. */
export async function openBrowser(): Promise<{ context: BrowserContext; close: () => Promise<void> }> {
  const profile = mkdtempSync(join(tmpdir(), 'rillcheck-browser-'));
  const context = await chromium.launchPersistentContext(profile, {
    executablePath: CHROMIUM,
    headless: true,
    offline: true,
    viewport: { width: WINDOW_PX, height: WINDOW_PX },
    args: [
      '--headless',
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
  return {
    context,
    close: async () => {
      await context.close();
      rmSync(profile, { recursive: true, force: true });
    },
  };
}

function canRun(path: string): boolean {
  try {
    accessSync(path, constants.X_OK);
    return true;
  } catch {
    // Not there, or not ours to run: the same to a test.
    return false;
  }
}
