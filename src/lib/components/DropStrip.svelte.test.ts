import { describe, expect, it, vi } from 'vitest';
import { page, userEvent } from 'vitest/browser';
import { render } from 'vitest-browser-svelte';
import DropStrip from './DropStrip.svelte';

const files = () => [new File(['a,b'], 'first.csv'), new File(['a,b'], 'second.csv')];

describe('DropStrip', () => {
	it('hands on every file that was chosen, and takes the same one again', async () => {
		const onfiles = vi.fn<(files: File[]) => void>();
		await render(DropStrip, { onfiles, limitBytes: 200 * 1024 * 1024 });
		const input = page.getByLabelText('Choose files');
		await userEvent.upload(input, files());
		await userEvent.upload(input, files().slice(0, 1));
		expect(onfiles.mock.calls.map(([taken]) => taken.map((file) => file.name))).toEqual([
			['first.csv', 'second.csv'],
			['first.csv']
		]);
	});

	it('hands on what is dropped, and nothing for a drop without files', async () => {
		const onfiles = vi.fn<(files: File[]) => void>();
		await render(DropStrip, { onfiles, limitBytes: 200 * 1024 * 1024 });
		const area = page.getByRole('group', { name: 'Drop lap files here' }).element();
		const drop = (dropped: File[]) => {
			const dataTransfer = new DataTransfer();
			for (const file of dropped) dataTransfer.items.add(file);
			area.dispatchEvent(new DragEvent('drop', { dataTransfer, bubbles: true, cancelable: true }));
		};
		drop([]);
		drop(files());
		expect(onfiles).toHaveBeenCalledTimes(1);
		expect(onfiles.mock.calls[0][0]).toHaveLength(2);
	});

	it('says how large a file may be', async () => {
		await render(DropStrip, { onfiles: () => {}, limitBytes: 500 * 1024 * 1024 });
		await expect.element(page.getByText(/up to 500.MB each/)).toBeVisible();
	});
});
