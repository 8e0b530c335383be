import { existsSync } from "node:fs";
import path from "node:path";
import CopyPlugin from "copy-webpack-plugin";
import { EsbuildPlugin } from "esbuild-loader";
import HtmlWebpackPlugin from "html-webpack-plugin";
import MiniCssExtractPlugin from "mini-css-extract-plugin";
import TerserPlugin from "terser-webpack-plugin";
import webpack from "webpack";
import { BOUND_AFTER, BOUND_BEFORE } from "./scripts/bound-names.mjs";
import { functionFiles, functionsMetadata } from "./scripts/metadata.mjs";
import { DIST, ROOT } from "./scripts/paths.mjs";
import { contentPolicy, loadsHostScript } from "./scripts/policy.mjs";

const TARGET = "es2022";

/** What both builds share. */
const common = {
  mode: "production",
  context: ROOT,
  devtool: false,
  resolve: {
    extensions: [".ts", ".js"],
    // The package's entry is one CommonJS file, which takes in all of it; its module sources, named in its "module" field, do not.
    alias: { "ml-matrix$": path.join(ROOT, "node_modules/ml-matrix/src/index.js") },
  },
  module: {
    rules: [
      { test: /\.ts$/, exclude: /node_modules/, loader: "esbuild-loader", options: { target: TARGET } },
      { test: /\.css$/, use: [MiniCssExtractPlugin.loader, { loader: "css-loader", options: { import: false } }] },
    ],
  },
  optimization: { minimizer: [new EsbuildPlugin({ target: TARGET, css: true, legalComments: "none" })] },
  performance: { hints: false },
  stats: "errors-warnings",
};

/** Writes functions.json beside functions.js. */
class MetadataPlugin {
  /** @param {webpack.Compiler} compiler */
  apply(compiler) {
    compiler.hooks.thisCompilation.tap("MetadataPlugin", (compilation) => {
      const stage = webpack.Compilation.PROCESS_ASSETS_STAGE_ADDITIONAL;
      compilation.hooks.processAssets.tapPromise({ name: "MetadataPlugin", stage }, async () => {
        for (const file of functionFiles()) compilation.fileDependencies.add(file);
        const metadata = await functionsMetadata();
        compilation.emitAsset("functions.json", new webpack.sources.RawSource(JSON.stringify(metadata, null, 1)));
      });
    });
  }
}

/** Drops the empty script that an entry of styles alone leaves behind. */
class DropScriptOf {
  /** @param {string} entry */
  constructor(entry) {
    this.entry = entry;
  }
  /** @param {webpack.Compiler} compiler */
  apply(compiler) {
    compiler.hooks.thisCompilation.tap("DropScriptOf", (compilation) => {
      const stage = webpack.Compilation.PROCESS_ASSETS_STAGE_OPTIMIZE_TRANSFER;
      compilation.hooks.processAssets.tap({ name: "DropScriptOf", stage }, () => {
        const files = compilation.entrypoints.get(this.entry)?.getFiles() ?? [];
        for (const file of files) if (file.endsWith(".js")) compilation.deleteAsset(file);
      });
    });
  }
}

/** A plain script that registers the functions: one file, no DOM, no second request. */
const functions = {
  ...common,
  name: "functions",
  target: ["es2022"],
  entry: { functions: "./src/functions/entry.ts" },
  output: { path: DIST, filename: "[name].js", iife: true, chunkFormat: false, chunkLoading: false },
  // Slower than esbuild and 3 kB smaller: this script is what every workbook with a formula loads first.
  optimization: { minimizer: [new TerserPlugin({ parallel: false, extractComments: false })] },
  plugins: [
    new webpack.optimize.LimitChunkCountPlugin({ maxChunks: 1 }),
    new webpack.BannerPlugin({ raw: true, banner: BOUND_BEFORE }),
    new webpack.BannerPlugin({ raw: true, footer: true, banner: BOUND_AFTER }),
    new MetadataPlugin(),
  ],
};

/**
 * @param {string} name
 * @param {string} template
 * @param {string} chunk the entry whose files the page loads
 */
const page = (name, template, chunk) =>
  new HtmlWebpackPlugin({
    filename: `${name}.html`,
    template,
    chunks: [chunk],
    inject: chunk !== "text",
    scriptLoading: "defer",
    minify: false,
    templateParameters: (/** @type {unknown} */ _, /** @type {{ css: string[] }} */ assets) => ({
      policy: contentPolicy({ hostScript: loadsHostScript(`${name}.html`) }),
      styles: assets.css[0],
    }),
  });

/** @type {Record<string, string>} */
const entries = {
  practice: "./src/host/practice/page/main.ts",
  pane: "./src/host/excel/main.ts",
};
for (const [name, file] of Object.entries(entries)) if (!existsSync(path.join(ROOT, file))) delete entries[name];

/** The pages; what they do not need at once is split off and loaded when used. */
const pages = {
  ...common,
  name: "pages",
  target: ["web", "es2022"],
  entry: { ...entries, text: "./assets/pages/text.css" },
  output: {
    path: DIST,
    filename: "[name].[contenthash:10].js",
    chunkFilename: "[name].[contenthash:10].js",
    assetModuleFilename: "[name].[contenthash:10][ext]",
    publicPath: "",
  },
  plugins: [
    new MiniCssExtractPlugin({ filename: "[name].[contenthash:10].css", chunkFilename: "[name].[contenthash:10].css" }),
    ...("practice" in entries ? [page("practice", "./src/host/practice/page/practice.html", "practice")] : []),
    ...("pane" in entries ? [page("pane", "./src/host/excel/pane.html", "pane")] : []),
    page("support", "./assets/pages/support.html", "text"),
    page("privacy", "./assets/pages/privacy.html", "text"),
    new DropScriptOf("text"),
    new CopyPlugin({
      patterns: [
        "manifest.xml",
        { from: "assets/icons/*.png", to: "icons/[name][ext]" },
      ],
    }),
  ],
};

const builds = existsSync(path.join(ROOT, "src/functions/entry.ts")) ? [functions, pages] : [pages];
export default builds;
