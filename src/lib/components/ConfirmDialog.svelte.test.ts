import { createRawSnippet } from 'svelte';
import { describe, expect, it } from 'vitest';
import { page, userEvent } from 'vitest/browser';
import { render } from 'vitest-browser-svelte';
import ConfirmDialog from './ConfirmDialog.svelte';

const props = {
	trigger: 'Delete this run',
	title: 'Delete this run?',
	action: '?/delete',
	confirm: 'Delete it',
	fields: { id: '7' },
	children: createRawSnippet(() => ({ render: () => '<p>Its laps will be gone.</p>' }))
};

describe('ConfirmDialog', () => {
	it('asks before anything happens, with the safe answer under the finger', async () => {
		await render(ConfirmDialog, props);
		await expect.element(page.getByRole('dialog')).not.toBeInTheDocument();
		await page.getByRole('button', { name: 'Delete this run' }).click();
		await expect.element(page.getByRole('dialog', { name: 'Delete this run?' })).toBeVisible();
		await expect.element(page.getByRole('button', { name: 'Keep it' })).toHaveFocus();
	});

	it('closes by the safe answer and by Escape', async () => {
		await render(ConfirmDialog, props);
		for (const close of [
			() => page.getByRole('button', { name: 'Keep it' }).click(),
			() => userEvent.keyboard('{Escape}')
		]) {
			await page.getByRole('button', { name: 'Delete this run' }).click();
			await close();
			await expect.element(page.getByRole('dialog')).not.toBeInTheDocument();
		}
	});

	it('sends the form that was meant', async () => {
		await render(ConfirmDialog, props);
		await page.getByRole('button', { name: 'Delete this run' }).click();
		const form = page.getByRole('button', { name: 'Delete it' }).element().closest('form');
		expect(form?.getAttribute('action')).toBe('?/delete');
		expect(form?.method).toBe('post');
		expect(form && Object.fromEntries(new FormData(form))).toEqual({ id: '7' });
	});
});
