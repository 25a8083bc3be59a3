import "@fontsource/atkinson-hyperlegible/400.css";
import "@fontsource/atkinson-hyperlegible/700.css";
import "./theme.css";
import { showTheme } from "./app/theme-choice.ts";
import "./app/millrace-app.ts";

showTheme();
