/** Tokens live in src/app.css (@theme); this file only says where class names are written. */
export default {
	content: ['./src/**/*.{html,js,svelte,ts}']
};
