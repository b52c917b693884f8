import tseslint from "typescript-eslint";
import { importDirections } from "./scripts/import-directions.mjs";

const PURE = ["app/domain/**/*.ts", "app/engineering/**/*.ts", "app/geometry/**/*.ts", "app/units.ts"];

export default tseslint.config(
  { ignores: ["node_modules/", "build/", ".react-router/", ".local/", "test-results/", "playwright-report/", "tests/support/models/"] },
  {
    files: ["**/*.{ts,tsx,mts,mjs,js}"],
    extends: [tseslint.configs.recommended],
    plugins: { house: { rules: { "import-directions": importDirections } } },
    linterOptions: { reportUnusedDisableDirectives: "error" },
    rules: {
      "house/import-directions": "error",
      eqeqeq: ["error", "always", { null: "ignore" }],
      "no-debugger": "error",
      // A focused or skipped test hides the others.
      "no-restricted-syntax": [
        "error",
        { selector: "MemberExpression[object.name=/^(test|it|describe)$/][property.name=/^(only|skip|todo)$/]", message: "No test is skipped or run alone." },
      ],
      "@typescript-eslint/no-unused-vars": ["error", { argsIgnorePattern: "^_", varsIgnorePattern: "^_", ignoreRestSiblings: true }],
      "@typescript-eslint/consistent-type-imports": ["error", { fixStyle: "inline-type-imports", disallowTypeAnnotations: false }],
    },
  },
  {
    // The framework generates such types: a route with nothing to give has an empty object.
    files: ["**/*.d.{ts,mts}"],
    rules: { "@typescript-eslint/no-unused-vars": "off" },
  },
  {
    files: PURE,
    rules: {
      // What reads a clock, draws a lot or reaches outside comes in as an argument.
      "no-restricted-globals": ["error", ...["process", "fetch", "console", "window", "document", "localStorage", "performance", "setTimeout", "setInterval", "Buffer"].map((name) => ({ name, message: "Pure code reaches nothing outside; hand it in as an argument." }))],
      "no-restricted-properties": [
        "error",
        { object: "Math", property: "random", message: "Pure code draws no lots; hand in a seeded generator." },
        { object: "Date", property: "now", message: "Pure code reads no clock; hand in the time." },
      ],
      "no-restricted-syntax": ["error", { selector: "NewExpression[callee.name='Date'][arguments.length=0]", message: "Pure code reads no clock; hand in the time." }],
    },
  },
);
