// Mutants of good files: no crash, every fault in words that can be printed, and nothing senseless let
// through.
#include <cmath>

#include "fieldfile/parsed.hpp"
#include "mutants.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

KnownStations two_stations() {
  KnownStations known;
  known["TAR-1"].offset = UtcOffset{std::chrono::minutes(60)};
  known["TAR-2"].offset = UtcOffset{};
  return known;
}

ParsedFile read(const std::string& text, bool plain_lines = true) {
  MemoryBytes bytes(text);
  KnownStations known = two_stations();
  ReadOptions options;
  options.plain_lines = plain_lines;
  options.limits.longest_line = 250;
  options.limits.longest_record = 400;
  return read_records(bytes, "fuzz.csv", known, options);
}

bool sensible(const ParsedFile& file) {
  bool good = file.rows > 0;
  for (const auto& at : file.gauge_zeros) good = good && std::abs(at.record.zero.metres()) <= 10'000;
  for (const auto& at : file.reaches) {
    const ReachRow& r = at.record;
    const bool manning = r.law != FlowLaw::manning || (r.slope > 0.0 && r.roughness_n > 0.0);
    const bool chezy = r.law != FlowLaw::chezy || (r.slope > 0.0 && r.chezy_c > 0.0);
    const bool crest = r.law != FlowLaw::critical || r.coefficient > 0.0;
    good = good && manning && chezy && crest && r.meander_factor >= 1 && std::isfinite(r.meander_factor);
  }
  for (const auto& at : file.surveys) {
    good = good && at.record.points.size() >= 3 && at.record.points.size() == at.point_lines.size();
    for (const auto& p : at.record.points)
      good = good && std::isfinite(p.distance_m) && std::isfinite(p.elevation_m);
  }
  for (const auto& at : file.gaugings) {
    const Gauging& g = at.record;
    good =
        good && g.discharge.m3s() >= 0 && std::isfinite(g.discharge.m3s()) && (!g.end || *g.end >= g.start);
  }
  for (const auto& at : file.corrections) good = good && at.record.from < at.record.until;
  for (const auto& series : file.stage) {
    for (std::size_t i = 1; i < series.readings.size(); ++i) {
      good = good && series.readings[i - 1].time < series.readings[i].time;
    }
  }
  return good;
}

}  // namespace

TEST_CASE("mutants of good files neither crash the readers nor pass with senseless content") {
  fuzz::Mutants mutants(20240601);
  int refused = 0;
  constexpr int kMutants = 8'000;
  for (int i = 0; i < kMutants; ++i) {
    const std::string text = mutants.next();
    INFO(text);
    const ParsedFile file = read(text);
    const std::string said = describe(file.findings, 1'000);
    if (!is_utf8(said)) FAIL("a finding that cannot be printed");
    for (const Finding& finding : file.findings) {
      if (finding.fault.empty() || finding.file != "fuzz.csv") FAIL("a finding without words or file");
    }
    if (file.findings.empty() && !sensible(file)) FAIL("senseless content without a finding");
    if (said != describe(read(text, false).findings, 1'000)) FAIL("the two ways of reading differ");
    refused += file.findings.empty() ? 0 : 1;
  }
  // Both sorts must occur, else the test says nothing.
  CHECK(refused > kMutants / 3);
  CHECK(refused < kMutants * 99 / 100);
}
