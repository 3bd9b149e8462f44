// The one place that names the library.

export { Component, h, html, render } from "../vendor/htm-preact.js";
export { useCallback, useEffect, useMemo, useRef, useState } from "../vendor/hooks.js";
