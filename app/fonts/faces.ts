import localFont from "next/font/local";

// Files come with the packages, so nothing is asked of another server. The second face of each family holds the
// letters of other European languages and is fetched only when a name needs one.
const text = localFont({
  src: "../../node_modules/@fontsource-variable/source-sans-3/files/source-sans-3-latin-wght-normal.woff2",
  weight: "200 900",
  variable: "--font-text",
  display: "swap",
});
const textMore = localFont({
  src: "../../node_modules/@fontsource-variable/source-sans-3/files/source-sans-3-latin-ext-wght-normal.woff2",
  weight: "200 900",
  variable: "--font-text-more",
  display: "swap",
  preload: false,
  adjustFontFallback: false,
});
const figures = localFont({
  src: "../../node_modules/@fontsource-variable/spline-sans-mono/files/spline-sans-mono-latin-wght-normal.woff2",
  weight: "300 700",
  variable: "--font-figures",
  display: "swap",
  adjustFontFallback: false,
});
const figuresMore = localFont({
  src: "../../node_modules/@fontsource-variable/spline-sans-mono/files/spline-sans-mono-latin-ext-wght-normal.woff2",
  weight: "300 700",
  variable: "--font-figures-more",
  display: "swap",
  preload: false,
  adjustFontFallback: false,
});

export const fontVariables = [text, textMore, figures, figuresMore].map((face) => face.variable).join(" ");
