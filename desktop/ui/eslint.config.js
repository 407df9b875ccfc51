import { createNodeResolver, importX } from 'eslint-plugin-import-x';
import svelte from 'eslint-plugin-svelte';
import tseslint from 'typescript-eslint';

const shell = {
  group: ['@tauri-apps/*'],
  message: 'Only src/backend speaks to the shell: use the Backend of the session.',
};
const upwards = (...rooms) => ({
  group: rooms.map((room) => `**/${room}/**`),
  message: 'shared knows no feature, a feature no view: move the piece down or pass it in.',
});
const may_not_import = (files, ...patterns) => ({
  files: files.flatMap((room) => [`src/${room}/**/*.ts`, `src/${room}/**/*.svelte`]),
  rules: { 'no-restricted-imports': ['error', { patterns }] },
});

export default tseslint.config(
  { ignores: ['dist', 'src/backend/generated', '**/*.json'] },
  ...tseslint.configs.strict,
  ...svelte.configs.recommended,
  {
    // Also for plain modules: the search for cycles reads components with the same options.
    languageOptions: {
      parserOptions: { parser: '@typescript-eslint/parser', extraFileExtensions: ['.svelte'] },
    },
  },
  {
    plugins: { 'import-x': importX },
    settings: {
      'import-x/extensions': ['.ts', '.svelte'],
      'import-x/parsers': {
        '@typescript-eslint/parser': ['.ts'],
        'svelte-eslint-parser': ['.svelte'],
      },
      'import-x/resolver-next': [
        createNodeResolver({ extensions: ['.ts', '.svelte', '.js', '.json'] }),
      ],
    },
    rules: {
      'import-x/no-cycle': 'error',
      'import-x/no-self-import': 'error',
      'no-console': 'error',
      'no-eval': 'error',
      eqeqeq: 'error',
      'svelte/no-at-html-tags': 'error',
      'svelte/no-inline-styles': 'error',
      '@typescript-eslint/consistent-type-imports': 'error',
    },
  },
  may_not_import(['shared'], shell, upwards('features', 'views')),
  may_not_import(['features'], shell, upwards('views')),
  may_not_import(['views', 'test'], shell),
  may_not_import(['backend'], upwards('shared', 'features', 'views')),
);
