// One result beside its limit: what it is, how it came about, the decision, the certificate.

import { Beside, Budget, sharesOf } from "../parts/beside.js";
import { html, useState } from "../parts/html.js";
import { LongField, useSaving } from "../parts/fields.js";
import { dayAndTime, dilution, percent, plain } from "../parts/format.js";
import { Empty, Frame, Problem, Where, say } from "../parts/frame.js";
import { state } from "../parts/journal.js";
import { ask } from "../parts/session.js";
import { Strip } from "../parts/strip.js";
import { sync } from "../parts/sync.js";
import { Tube } from "../parts/tube.js";
import { one, programme, useView, whereIs } from "../parts/view.js";
import { Number_, Verdict, verdictOf } from "./words.js";

function Verdicts({ result }) {
  return (result.verdicts ?? []).map((verdict) => html`<div key=${`${verdict.basis}${verdict.effective_from}`} class="card ${verdict.verdict === "above" ? "stop" : ""}">
    <p><strong>${verdict.why}</strong></p>
    ${verdict.limit !== null && html`<p class="soft small">In force since ${verdict.effective_from}; ${verdict.source}. ${verdict.probability_above !== null ? `For information: the true value lies above the limit with a probability of ${percent(verdict.probability_above)}.` : ""}</p>`}
    <p class="soft small">${verdict.rule} (${verdict.rule_source})</p></div>`);
}

function Tubes({ run, code }) {
  const tubes = run.tubes.filter((tube) => tube.bottle === code);
  return html`<section class="card"><h2>Tubes</h2><div class="rack">${tubes.map((tube) => html`<div class="place" key=${tube.position}>
    <${Tube} share=${tube.share} height=${48} /><span>${tube.absorbance?.text ?? "not read"} AU</span><span class="number">${tube.excluded ? `out: ${tube.excluded.cause}` : tube.in_tube === null ? "" : `${plain(tube.in_tube)} mg/L`}</span></div>`)}</div></section>`;
}

function Decide({ result }) {
  const [reason, setReason] = useState("");
  const decide = (decision) => async () => {
    if (decision === "rejected" && !reason.trim()) throw new Error("A rejection needs its reason.");
    await state("result.reviewed", result.id, { decision, reason });
    say(`Saved on this tablet: ${decision}.`);
  };
  const accept = useSaving(decide("accepted"));
  const reject = useSaving(decide("rejected"));
  if (result.review) return html`<section class="card"><h2>Decision</h2><p><strong>${result.review.decision}</strong> by ${result.review.by}. ${result.review.reason}</p><${Where} about=${result.id} /></section>`;
  return html`<section class="card stack"><h2>Decision</h2>
    <${LongField} label="Reason" value=${reason} onInput=${setReason} hint="needed for a rejection; the number stays in the file either way" />
    <${Problem} words=${accept.problem || reject.problem} />
    <div class="row"><button type="button" onClick=${accept.save} disabled=${accept.busy}>Accept</button><button type="button" class="stop" onClick=${reject.save} disabled=${reject.busy}>Reject</button></div></section>`;
}

function printed(number) {
  const view = window.open(`/api/certificates/${number}.pdf`, "_blank");
  if (!view) throw new Error("The browser did not open the certificate: use Download and print it from there.");
}

function Certificate({ result }) {
  const certificate = useView(() => (result.certificate ? one("certificate", result.certificate) : null));
  const waits = (useView(() => whereIs(result.id)) ?? "server") !== "server";
  const issue = useSaving(async () => {
    const made = await ask("POST", "/api/certificates", { result: result.id, meaning: "authorised" });
    await sync();
    say(`Certificate ${made.number} issued.`);
  });
  const print = useSaving(async () => printed(result.certificate));
  if (result.certificate) {
    return html`<section class="card stack"><h2>Certificate ${result.certificate}</h2>
      <p>${certificate?.state ?? "valid"}, authorised by ${certificate?.by_name}. <a href="/verify/${result.certificate}" target="_blank">How anybody verifies it</a></p>
      <p class="soft small">Digest of its data: <code>${certificate?.data_digest}</code></p>
      <${Problem} words=${print.problem} />
      <div class="row"><a class="button" href="/api/certificates/${result.certificate}.pdf" download="certificate-${result.certificate}.pdf">Download</a>
        <button type="button" onClick=${print.save}>Open to print</button></div></section>`;
  }
  if (result.review?.decision !== "accepted") return null;
  if (waits) return html`<section class="card"><h2>Certificate</h2><p>It can be issued as soon as the decision is on the server.</p></section>`;
  return html`<section class="card stack"><h2>Certificate</h2>
    <p>By issuing you authorise this result under your name. The number is given by the server; what is issued is never changed, only amended by a later certificate.</p>
    <${Problem} words=${issue.problem} />
    <button class="main" type="button" onClick=${issue.save} disabled=${issue.busy}>${issue.busy ? "Issuing…" : "Issue the certificate"}</button></section>`;
}

function bar(result) {
  return [{ factor: result.dilution_factor, low: result.reporting_level, high: result.top, share: null, chosen: true }];
}

/** A distribution that stands for a result: where it is and how sure. */
function around(result) {
  if (result.status !== "ok" || !result.u) return null;
  const sd = result.u / result.cod;
  const mean = Math.log(result.cod);
  return {
    quantile: (p) => Math.exp(mean + sd * (p < 0.5 ? -1.645 : p > 0.5 ? 1.645 : 0)),
    density: (log) => Math.exp(-0.5 * ((log - mean) / sd) ** 2),
  };
}

/** The screen of one result. */
export function ResultReview({ id }) {
  const result = useView(() => one("result", id));
  const run = useView(() => (result?.run ? one("run", result.run) : null));
  const point = useView(() => (result?.point ? one("point", result.point) : null));
  const zone = useView(programme)?.zone;
  if (!result) return html`<${Frame} place="review" title="Result"><${Empty} title="This result is not on this tablet"><a href="/review">All of Review</a><//><//>`;
  const verdict = verdictOf(result);
  return html`<${Frame} place="review" title="${point?.discharger_name ?? "Sample"}, ${point?.name ?? result.bottle}" about=${result.bottle}>
    <div class="stack">
      <section class="card">
        <div class="soft">Chemical oxygen demand, sample of ${dayAndTime(result.collected_at, zone)}</div>
        <div><${Number_} result=${result} big /></div>
        <div class="row"><${Verdict} result=${result} />${!result.checks_ok && html`<span class="tag wait"><span aria-hidden="true">◇</span>a check of the run did not hold</span>`}</div>
        <${Strip} predictive=${around(result)} bars=${bar(result)} limit=${verdict?.limit ?? null} />
        <${Beside} result=${result} />
        <p class="soft">Dilution: ${dilution(result.dilution_factor)}; reporting level ${plain(result.reporting_level)} mg/L after dilution.</p></section>
      <${Verdicts} result=${result} />
      <${Decide} result=${result} />
      <${Certificate} result=${result} />
      ${run && html`<${Tubes} run=${run} code=${result.bottle} /><p><a href="/bench/run/${encodeURIComponent(result.run)}">The whole run: ${run.name}</a></p>`}
      ${sharesOf(result) && html`<section class="card"><h2>Where the uncertainty comes from</h2><${Budget} result=${result} /></section>`}
      <p><a href="/review/point/${encodeURIComponent(result.point)}">History of the point</a> · <a href="/review">All of Review</a></p>
    </div><//>`;
}
