#include "rederivation/diagnostics.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "hydraulics/area_law.hpp"
#include "hydraulics/power.hpp"
#include "hydraulics/uniform_flow.hpp"
#include "rating/evaluate.hpp"
#include "rating/residual_tests.hpp"

namespace scourbook::rederivation {
namespace {

using rating::Observation;

const char* const kOwn = "own rule";
const char* const kIso = "ISO 1100-2:2010 (from memory)";
constexpr int kLeastSigns = 6, kMostRuns = 500, kLeastT = 3;
constexpr double kTestLevel = 0.05;

struct Deviation {
  double level_m, ln, sd;
};

/// Deviations of the used discharges, by level.
std::vector<Deviation> deviations_by_level(const RatingCurve& curve) {
  std::vector<Deviation> all;
  for (const CurveGauging& g : curve.gaugings) {
    if (g.use != GaugingUse::left_out && g.residual) all.push_back({g.level_m, *g.residual, g.sd_ln_q});
  }
  std::stable_sort(all.begin(), all.end(),
                   [](const auto& a, const auto& b) { return a.level_m < b.level_m; });
  return all;
}

/// area R^b of the part, or the critical flow with C_d = 1: flow at velocity scale 1.
double section_flow(const hydraulics::SectionPart& part, FlowLaw law, double level_m) {
  if (law == FlowLaw::critical) return hydraulics::crest_flow(part, level_m, 1);
  const auto elements = part.at(level_m);
  if (!(elements.area_m2 > 0)) return 0;
  return elements.area_m2 * std::pow(elements.hydraulic_radius_m(), hydraulics::velocity_exponent(law));
}

void tests_of_signs(const std::vector<Deviation>& deviations, std::vector<Diagnostic>& out) {
  const auto n = static_cast<int>(deviations.size());
  const std::string rule = "two-sided binomial probability of the split of signs, at 5 %";
  if (n < kLeastSigns) {
    out.push_back({"signs_p",
                   {},
                   kTestLevel,
                   "not possible",
                   fmt::format("test of signs: needs {} gaugings, there are {}", kLeastSigns, n),
                   rule,
                   kIso});
    return;
  }
  const auto positive = static_cast<int>(
      std::count_if(deviations.begin(), deviations.end(), [](const Deviation& d) { return d.ln > 0; }));
  const double p = rating::sign_test_p(positive, n);
  out.push_back({"signs_p", p, kTestLevel, p >= kTestLevel ? "passed" : "failed",
                 fmt::format("signs: {} of {} gaugings lie above the curve (p {:.2f})", positive, n, p), rule,
                 kIso});
}

/// The least p that any number of runs of these signs can have.
double least_runs_p(int positive, int negative) {
  const int most = 2 * std::min(positive, negative) + (positive != negative ? 1 : 0);
  return std::min(rating::runs_p(2, positive, negative), rating::runs_p(most, positive, negative));
}

void test_of_runs(const std::vector<Deviation>& deviations, std::vector<Diagnostic>& out) {
  const std::string rule =
      "two-sided exact probability of the number of runs of equal sign in the order of level, at 5 %";
  std::vector<double> values;
  for (const Deviation& d : deviations) values.push_back(d.ln);
  const auto count = [&](auto sign) {
    return static_cast<int>(std::count_if(values.begin(), values.end(), sign));
  };
  const int positive = count([](double v) { return v > 0; }),
            negative = count([](double v) { return v < 0; });
  const bool possible = positive > 0 && negative > 0 && positive + negative <= kMostRuns &&
                        least_runs_p(positive, negative) < kTestLevel;
  if (!possible) {
    out.push_back({"runs_p",
                   {},
                   kTestLevel,
                   "not possible",
                   fmt::format("test of runs: {} gaugings above and {} below the curve can show nothing",
                               positive, negative),
                   rule,
                   kIso});
    return;
  }
  const int runs = rating::count_runs(values);
  const double p = rating::runs_p(runs, positive, negative);
  out.push_back(
      {"runs_p", p, kTestLevel, p >= kTestLevel ? "passed" : "failed",
       fmt::format("runs: {} changes between above and below in the order of level (p {:.2f})", runs - 1, p),
       rule, kIso});
}

void test_of_mean(const std::vector<Deviation>& deviations, std::vector<Diagnostic>& out) {
  const auto n = static_cast<int>(deviations.size());
  const std::string rule = "Student's t of the mean deviation in sds, two-sided, at 5 %";
  std::vector<double> values;
  for (const Deviation& d : deviations) values.push_back(d.ln / d.sd);
  const auto t = n >= kLeastT ? rating::student_t(values) : std::nullopt;
  if (!t) {
    out.push_back({"student_t",
                   {},
                   {},
                   "not possible",
                   fmt::format("Student's t: needs {} gaugings, there are {}", kLeastT, n),
                   rule,
                   kIso});
    return;
  }
  const double limit = rating::student_quantile(0.975, n - 1);
  out.push_back({"student_t", *t, limit, std::abs(*t) <= limit ? "passed" : "failed",
                 fmt::format("mean deviation: Student's t {:.2f} against {:.2f}", *t, limit), rule, kIso});
}

double median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  const std::size_t half = values.size() / 2;
  return values.size() % 2 == 1 ? values[half] : (values[half - 1] + values[half]) / 2;
}

}  // namespace

void tell_moves(const Derivation& d, std::vector<Diagnostic>& out) {
  for (std::size_t k = 0; k < d.curve.controls.size(); ++k) {
    const ControlCoefficients& now = d.curve.controls[k];
    const std::optional<ControlCoefficients>& before = d.before[k];
    if (!before) continue;
    const int parent = d.input.parent->curve.number;
    const auto tell = [&](const char* name, double value, const std::string& text) {
      out.push_back({fmt::format("{} {}", name, now.name),
                     value,
                     {},
                     "note",
                     fmt::format("{}: {} against curve {}", now.name, text, parent),
                     "effective offset and exponent, surveyed coefficients, less the parent's",
                     kOwn});
    };
    const double h0 = now.h0_m - before->h0_m, c = now.area_exponent - before->area_exponent;
    const double w = 100 * (now.area_coefficient / before->area_coefficient - 1);
    const double f = 100 * (now.section_coefficient / before->section_coefficient - 1);
    tell("move_h0_m", h0, fmt::format("offset {:+.3f} m", h0));
    tell("move_c", c, fmt::format("area exponent {:+.3f}", c));
    tell("move_w_pct", w, fmt::format("area coefficient {:+.1f} %", w));
    tell("move_f_pct", f, fmt::format("section coefficient {:+.1f} %", f));
  }
}

/// The curve's own control against the section as surveyed, put where the allowance and the trims say that it
/// lies.
void tell_gap_to_section(const Derivation& d, std::vector<Diagnostic>& out) {
  for (std::size_t k = 0; k < d.curve.controls.size(); ++k) {
    const ControlCoefficients& c = d.curve.controls[k];
    if (!d.surveyed[k].found) continue;
    double gap = 0, at = 0;
    for (const double level : hydraulics::law_levels({c.range_from_m, c.range_to_m})) {
      const double own = c.velocity_scale * section_flow(d.surveyed[k].part, c.law, level);
      const double effective_level = level + (c.h0_m - c.surveyed_h0_m);
      const double law = rating::control_flow(c, effective_level);
      if (!(own > 0 && law > 0) || std::abs(std::log(law / own)) <= gap) continue;
      gap = std::abs(std::log(law / own));
      at = effective_level;
    }
    out.push_back(
        {"gap_to_section_ln " + c.name,
         gap,
         {},
         "note",
         fmt::format(
             "{}: the curve is {:.1f} % off the section's own {} with the same scale at most, at {:.2f} m",
             c.name, 100 * std::expm1(gap), c.law == FlowLaw::critical ? "critical flow" : "conveyance", at),
         "largest difference over the levels of the law",
         "divided-channel method; Chow 1959 (from memory)"});
  }
}

void test_residuals(const Derivation& d, std::vector<Diagnostic>& out) {
  const auto deviations = deviations_by_level(d.curve);
  tests_of_signs(deviations, out);
  test_of_runs(deviations, out);
  test_of_mean(deviations, out);
}

void tell_gaugings(const Derivation& d, std::vector<Diagnostic>& out) {
  const auto deviations = deviations_by_level(d.curve);
  const auto used = static_cast<double>(d.used.size());
  if (deviations.empty()) {
    out.push_back({"gaugings_used",
                   used,
                   {},
                   "note",
                   fmt::format("{} gaugings used, none with a flow; surveyed to {:.2f} m", d.used.size(),
                               d.curve.surveyed_top_m),
                   "number and range",
                   kOwn});
    return;
  }
  const double low = deviations.front().level_m, high = deviations.back().level_m;
  out.push_back(
      {"gaugings_used",
       used,
       {},
       "note",
       fmt::format(
           "{} gaugings used; with a flow: {:.2f} to {:.2f} m, {:.3g} to {:.3g} m3/s; surveyed to {:.2f} m",
           d.used.size(), low, high, *d.curve.gauged_low_m3s, *d.curve.gauged_high_m3s,
           d.curve.surveyed_top_m),
       "number and range",
       kOwn});
  const double cease = rating::cease_to_flow_m(d.curve);
  const double depth = d.curve.surveyed_top_m - cease;
  if (!(depth > 0)) return;
  const double share = 100 * (high - low) / depth;
  out.push_back(
      {"gauged_spread_pct",
       share,
       {},
       "note",
       fmt::format("the gaugings span {:.0f} % of the depth from cease-to-flow ({:.2f} m) to the surveyed "
                   "top, the highest at {:.0f} %",
                   share, cease, 100 * (high - cease) / depth),
       "share of the depth",
       kOwn});
}

void tell_measured_geometry(const Derivation& d, std::vector<Diagnostic>& out) {
  const ControlCoefficients* channel = nullptr;
  const hydraulics::SectionPart* part = nullptr;
  for (std::size_t k = 0; k < d.curve.controls.size(); ++k) {
    if (d.curve.controls[k].kind != ControlKind::channel || !d.surveyed[k].found) continue;
    channel = &d.curve.controls[k];
    part = &d.surveyed[k].part;
  }
  if (channel == nullptr) return;
  std::vector<double> areas, widths;
  for (const GaugingAtLevel& offered : d.input.gaugings) {
    // Above the bank the gauging holds more than the part.
    const double level = offered.level_m - d.curve.survey_level_error_m;
    if (level > part->lower_end_m()) continue;
    const auto elements = part->at(level);
    if (!(elements.area_m2 > 0)) continue;
    if (offered.gauging.area_m2) areas.push_back(*offered.gauging.area_m2 / elements.area_m2);
    if (offered.gauging.width_m) widths.push_back(*offered.gauging.width_m / elements.top_width_m);
  }
  const auto tell = [&](const char* name, const char* what, const std::vector<double>& ratios) {
    if (ratios.empty()) return;
    const double middle = median(ratios);
    const bool near = middle > 0.8 && middle < 1.25;
    out.push_back(
        {name, middle, 1.25, near ? "passed" : "failed",
         fmt::format("measured {} of {} gaugings: {:.2f} times the section's at the same level (median){}",
                     what, ratios.size(), middle,
                     near ? "" : "; is another section meant, or are survey or datum wrong?"),
         "median ratio between 1/1.25 and 1.25", kOwn});
  };
  tell("measured_area_ratio", "area", areas);
  tell("measured_width_ratio", "width", widths);
}

std::vector<Diagnostic> diagnose(const Derivation& derivation) {
  std::vector<Diagnostic> out;
  test_held_scale(derivation, out);
  tell_refined_scale(derivation, out);
  test_residuals(derivation, out);
  tell_moves(derivation, out);
  tell_gap_to_section(derivation, out);
  tell_other_policy(derivation, out);
  tell_measured_geometry(derivation, out);
  tell_gaugings(derivation, out);
  return out;
}

}  // namespace scourbook::rederivation
