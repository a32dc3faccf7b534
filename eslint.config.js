import tseslint from 'typescript-eslint';
export default tseslint.config({ ignores: ['node_modules', 'dist', '.data'] }, ...tseslint.configs.recommended);
