import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { escapeHtml, plainText, readRichText, richTextHtml } from './richText.ts';

describe('richTextHtml', () => {
	it.each([
		{ name: 'emphasis', text: 'Let it *go* **slowly**', html: '<p>Let it <em>go</em> <strong>slowly</strong></p>' },
		{
			name: 'a value of the reference',
			text: 'at 412 m, not ==424 m==',
			html: '<p>at 412 m, not <mark>424 m</mark></p>'
		},
		{
			name: 'a list after a line',
			text: 'Three things:\n- firm\n- then *slow*',
			html: '<p>Three things:</p><ul><li>firm</li><li>then <em>slow</em></li></ul>'
		},
		{ name: 'paragraphs', text: 'one\n\ntwo\nlines', html: '<p>one</p><p>two<br>lines</p>' },
		{ name: 'signs without a partner', text: '3 * 4 = 12, **', html: '<p>3 * 4 = 12, **</p>' },
		{
			name: 'HTML as text',
			text: '<img src=x onerror="alert(1)">*<b>*',
			html: '<p>&lt;img src=x onerror=&quot;alert(1)&quot;&gt;<em>&lt;b&gt;</em></p>'
		},
		{ name: 'nothing', text: ' \n ', html: '' }
	])('writes $name', ({ text, html }) => {
		expect(richTextHtml(text)).toBe(html);
	});

	it('lets no tag through but its own, whatever is written', () => {
		fc.assert(
			fc.property(fc.string({ unit: fc.constantFrom('<', '>', '*', '=', '-', '\n', 'a', '&', '"', ' ') }), (text) => {
				const left = richTextHtml(text).replaceAll(/<\/?(?:p|ul|li|em|strong|mark)>|<br>/g, '');
				expect(left).not.toMatch(/[<>"]/);
			}),
			{ numRuns: 400, seed: 6 }
		);
	});

	it('keeps every letter', () => {
		fc.assert(
			fc.property(fc.string({ unit: fc.constantFrom('a', 'b', '*', '=', ' ', '\n') }), (text) => {
				const letters = (some: string) => some.replaceAll(/[^ab]/g, '');
				expect(letters(plainText(text))).toBe(letters(text));
			}),
			{ numRuns: 300, seed: 7 }
		);
	});
});

describe('readRichText', () => {
	it('gives blocks and spans', () => {
		expect(readRichText('a *b*\n- c')).toEqual([
			{
				kind: 'paragraph',
				spans: [
					{ text: 'a ', style: 'plain' },
					{ text: 'b', style: 'emphasis' }
				]
			},
			{ kind: 'list', items: [[{ text: 'c', style: 'plain' }]] }
		]);
	});
});

describe('escapeHtml', () => {
	it('escapes what HTML would read', () => {
		expect(escapeHtml(`<&>"'`)).toBe('&lt;&amp;&gt;&quot;&#39;');
	});
});
