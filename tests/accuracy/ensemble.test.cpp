// How near re-derived curves come to the truth of two small ensembles of synthetic stations (data/README.md).

#include <catch2/catch.hpp>

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <map>
#include <sstream>

#include "fieldfile/take.hpp"
#include "history/derivation_input.hpp"
#include "rating/evaluate.hpp"
#include "rederivation/derive.hpp"
#include "store/book.hpp"

using namespace scourbook;

namespace {

namespace fs = std::filesystem;

struct TruePoint {
  std::string band;
  double stage_m, discharge_m3s;
};
using Truth = std::map<std::string, std::vector<TruePoint>>;

Truth read_truth(const fs::path& file) {
  std::ifstream in(file);
  REQUIRE(in);
  Truth truth;
  std::string line;
  std::getline(in, line);
  while (std::getline(in, line)) {
    std::istringstream cells(line);
    std::string station, band, stage, flow;
    std::getline(cells, station, ',');
    std::getline(cells, band, ',');
    std::getline(cells, stage, ',');
    std::getline(cells, flow, ',');
    truth[station].push_back({band, std::stod(stage), std::stod(flow)});
  }
  return truth;
}

/// A book in a folder of its own, with an ensemble taken in.
class Ensemble {
 public:
  explicit Ensemble(const std::string& name)
      : folder_(fs::temp_directory_path() / ("accuracy-" + name)),
        data_(fs::path(SCOURBOOK_TESTS_DIR) / "accuracy" / "data" / name),
        truth_(read_truth(data_ / "truth.csv")) {
    fs::remove_all(folder_);
    fs::create_directories(folder_);
    book_.emplace(store::Book::create((folder_ / "ensemble.scourbook").string(), {"test", "", "", "new"}));
    std::vector<std::string> files;
    for (const char* file : {"station.csv", "zero.csv", "reach.csv", "survey.csv.gz", "gauging.csv.gz"}) {
      files.push_back((data_ / file).string());
    }
    fieldfile::TakeOptions options;
    options.who = "test";
    const auto taken = fieldfile::take(*book_, files, options);
    INFO(describe(taken.findings));
    REQUIRE(taken.findings.empty());
  }
  ~Ensemble() {
    book_.reset();
    fs::remove_all(folder_);
  }
  store::Book& book() { return *book_; }
  const Truth& truth() const { return truth_; }

 private:
  fs::path folder_, data_;
  Truth truth_;
  std::optional<store::Book> book_;
};

Instant utc(const char* text) {
  return parse_time(text, UtcOffset{}).time;
}

RatingCurve store_curve(store::Book& book, RatingCurve curve) {
  auto writer = book.begin({"test", curve.station, "", "derive"});
  curve = writer.add_curve(curve);
  writer.commit();
  return curve;
}

rederivation::Result derive(const store::Book& book, const history::DerivationRequest& request) {
  const auto collected = history::collect(book, request);
  INFO(request.station);
  for (const auto& refusal : collected.refusals) UNSCOPED_INFO(refusal);
  REQUIRE(collected.refusals.empty());
  auto result = rederivation::derive(collected.input);
  for (const auto& refusal : result.refusals) UNSCOPED_INFO(refusal);
  REQUIRE(result.status == rederivation::Status::ok);
  return result;
}

/// rms of ln(Q / truth) of one station by band; sd-normalised share inside the 95 % band.
using ByBand = std::map<std::string, double>;

struct Scores {
  std::map<std::string, std::vector<double>> rms;  ///< by band, one a station
  int inside = 0, all = 0;
};

void score(const RatingCurve& curve, const std::vector<TruePoint>& truth, Scores& scores) {
  constexpr double kGaugeZero = 100;  // m, of every station
  std::map<std::string, std::pair<double, int>> sums;
  for (const TruePoint& point : truth) {
    const double level = point.stage_m + kGaugeZero;
    const double flow = rating::evaluate(curve, level).discharge_m3s;
    // A flow of nothing where there is one is as bad as it gets; bounded so that it can be averaged.
    const double error = flow > 0 ? std::max(-3.0, std::log(flow / point.discharge_m3s)) : -3.0;
    sums[point.band].first += error * error;
    ++sums[point.band].second;
    ++scores.all;
    scores.inside += std::abs(error) <= 1.96 * rating::sd_ln_q(curve, level);
  }
  for (const auto& [band, sum] : sums) scores.rms[band].push_back(std::sqrt(sum.first / sum.second));
}

double quantile(std::vector<double> values, double p) {
  std::sort(values.begin(), values.end());
  const double at = p * static_cast<double>(values.size() - 1);
  const auto low = static_cast<std::size_t>(at);
  const std::size_t high = std::min(low + 1, values.size() - 1);
  return values[low] + (at - static_cast<double>(low)) * (values[high] - values[low]);
}

Scores run(Ensemble& ensemble, bool with_gaugings) {
  Scores scores;
  for (const auto& [station, truth] : ensemble.truth()) {
    history::DerivationRequest first;
    first.station = station;
    first.survey = station + "-S1";
    first.from = utc("2015-01-01T00:00");
    first.until = utc("2019-01-01T00:00");
    first.first = true;
    const RatingCurve parent = store_curve(ensemble.book(), derive(ensemble.book(), first).curve);
    history::DerivationRequest next;
    next.station = station;
    next.survey = station + "-S2";
    next.from = utc("2019-01-01T00:00");
    next.descends_from = parent.number;
    next.options.without_gaugings = !with_gaugings;
    score(derive(ensemble.book(), next).curve, truth, scores);
  }
  return scores;
}

struct Aim {
  const char* band;
  double median;
};

void hold(const std::string& name, bool with_gaugings, const std::vector<Aim>& aims) {
  Ensemble ensemble(name);
  const Scores scores = run(ensemble, with_gaugings);
  std::printf("%s, %s: ", name.c_str(), with_gaugings ? "3 gaugings" : "survey alone");
  for (const auto& [band, rms] : scores.rms) {
    std::printf(" %s %.3f / %.3f", band.c_str(), quantile(rms, 0.5), quantile(rms, 0.9));
  }
  std::printf("  inside 95 %% bands: %.1f %%\n", 100.0 * scores.inside / scores.all);
  for (const Aim& aim : aims) {
    INFO(name << " " << aim.band);
    REQUIRE(scores.rms.count(aim.band) == 1);
    CHECK(quantile(scores.rms.at(aim.band), 0.5) <= aim.median);
  }
  CHECK(scores.inside >= 0.93 * scores.all);
}

}  // namespace

// The aims are the medians of a first prototype of these rules on the same stations, with a tenth of margin:
// sixteen stations are few.
TEST_CASE("exact surveys: curves re-derived from the survey alone") {
  hold("level-exact", false, {{"low", 1.1 * 0.030}, {"in-bank", 1.1 * 0.014}, {"over-bank", 1.1 * 0.026}});
}
TEST_CASE("exact surveys: curves re-derived with three gaugings") {
  hold("level-exact", true, {{"low", 1.1 * 0.031}, {"in-bank", 1.1 * 0.018}, {"over-bank", 1.1 * 0.025}});
}
TEST_CASE("surveys off by 5 cm: curves re-derived from the survey alone") {
  hold("level-5cm", false, {{"low", 1.1 * 0.214}, {"in-bank", 1.1 * 0.055}, {"over-bank", 1.1 * 0.059}});
}
TEST_CASE("surveys off by 5 cm: curves re-derived with three gaugings") {
  hold("level-5cm", true, {{"low", 1.1 * 0.060}, {"in-bank", 1.1 * 0.019}, {"over-bank", 1.1 * 0.045}});
}
