// Stage against a slow definition: a map from time to reading, one copy for every act. Random takes and
// corrections, and months of so many pieces that they are merged.

#include <catch2/catch.hpp>
#include <cmath>
#include <map>
#include <random>

#include "store/full_book.hpp"
#include "store/plain.hpp"

using namespace full_book;
using store::Book;
using store::kMissing;
using store::StageBlock;
using store::StageSeries;
using store::StageUnit;

namespace {

struct ModelReading {
  std::int64_t ticks = kMissing;
  Quality quality = Quality::unchecked;
  std::int64_t file = 0;
  std::int64_t line = 0;
  std::string recorded;
};
using Model = std::map<std::int64_t, ModelReading>;

std::string recorded(std::int64_t value, int decimals) {
  if (value == kMissing) return "missing";
  char text[32];
  std::snprintf(text, sizeof text, "%.*f", decimals, double(value) / std::pow(10.0, decimals));
  return text;
}

/// What a correct store does with a series, by the words of its contract.
void take_in_model(Model& model, const StageSeries& series, std::int64_t file, bool correct) {
  if (series.readings.empty()) return;
  if (correct) {
    model.erase(model.lower_bound(to_ms(series.readings.front().time)),
                model.upper_bound(to_ms(series.readings.back().time)));
  }
  for (const auto& reading : series.readings) {
    model.try_emplace(
        to_ms(reading.time),
        ModelReading{store::ticks_of(reading.value, series.unit, series.decimals), reading.quality, file,
                     reading.line, recorded(reading.value, series.decimals)});
  }
}

/// All months of the station, joined.
StageBlock whole(const Book& book, Known known) {
  StageBlock all;
  for (const UtcMonth month : book.stage_months(kStation, known)) {
    const StageBlock block = book.stage_block(kStation, month, known);
    all.time_ms.insert(all.time_ms.end(), block.time_ms.begin(), block.time_ms.end());
    all.ticks.insert(all.ticks.end(), block.ticks.begin(), block.ticks.end());
    all.quality.insert(all.quality.end(), block.quality.begin(), block.quality.end());
  }
  return all;
}

void check_equal(const Book& book, const Model& model, Known known) {
  const StageBlock all = whole(book, known);
  REQUIRE(all.time_ms.size() == model.size());
  std::size_t i = 0;
  bool equal = true;
  for (const auto& [time, reading] : model) {
    equal =
        equal && all.time_ms[i] == time && all.ticks[i] == reading.ticks && all.quality[i] == reading.quality;
    ++i;
  }
  CHECK(equal);
}

void check_origins(const Book& book, const Model& model, Known known) {
  for (const auto& [time, reading] : model) {
    const auto origin = book.reading_origin(kStation, from_ms(time), known);
    REQUIRE(origin);
    const bool equal = origin->file == reading.file && origin->line == reading.line &&
                       origin->recorded == reading.recorded && origin->quality == reading.quality &&
                       origin->act == book.file(reading.file)->act;
    CAPTURE(format_time(from_ms(time), {}), origin->file, origin->line, origin->recorded, reading.recorded);
    CHECK(equal);
  }
}

/// Takes into a book and a model side by side, and keeps what the model was at every act.
class Pair {
 public:
  Pair() : book(Book::create(folder_.path(), head("new"))) {}

  store::StageTaken take(const StageSeries& series, bool correct) {
    auto writer = book.begin(head("stage"));
    const auto file = writer.add_file("stage.csv", 1, std::string(64, '0'), "stage");
    const store::StageTaken taken = writer.add_stage(series, file, correct);
    const std::int64_t act = writer.commit().number;
    // A correction that only repeats stores nothing, so the readings keep their first origin.
    Model next = model;
    take_in_model(next, series, file, correct);
    if (taken.pieces > 0) model = keep_repeated(next, series, correct);
    states[act] = model;
    return taken;
  }

  Book& written() { return book; }

 private:
  /// A month that a correction only repeats is left as it is.
  Model keep_repeated(Model next, const StageSeries& series, bool correct) const {
    if (!correct || series.readings.empty()) return next;
    const int first = utc_month_of(series.readings.front().time).number;
    const int last = utc_month_of(series.readings.back().time).number;
    for (int month = first; month <= last; ++month) {
      const std::int64_t from = to_ms(start_of(UtcMonth{month})),
                         until = to_ms(start_of(UtcMonth{month + 1}));
      const auto said = [&](const Model& m) {
        std::string text;
        for (auto at = m.lower_bound(from); at != m.lower_bound(until); ++at) {
          text += std::to_string(at->first) + ":" + std::to_string(at->second.ticks) + ":" +
                  std::string(word(at->second.quality)) + " ";
        }
        return text;
      };
      if (said(next) != said(model)) continue;
      for (auto at = next.lower_bound(from); at != next.lower_bound(until); ++at)
        at->second = model.at(at->first);
    }
    return next;
  }

  Folder folder_;

 public:
  Book book;
  Model model;
  std::map<std::int64_t, Model> states;
};

}  // namespace

TEST_CASE("random takes and corrections over three months are held as the model says, at every act") {
  for (const unsigned seed : {1u, 2u, 3u, 4u, 5u, 6u}) {
    std::mt19937_64 random(seed);
    const auto below = [&](std::int64_t limit) { return std::int64_t(random() % std::uint64_t(limit)); };
    CAPTURE(seed);
    Pair pair;
    const std::int64_t start = to_ms(at("2020-01-29T00:00Z"));
    for (int round = 0; round < 90; ++round) {
      const bool correct = below(4) == 0;
      StageSeries series{kStation, below(5) == 0 ? StageUnit::foot : StageUnit::metre, int(below(4)), {}};
      const std::int64_t step = below(3) == 0 ? 900'000 : 3'600'000;
      std::int64_t time = start + below(33 * 24) * 3'600'000;  // into March
      const std::int64_t count = below(60);
      for (std::int64_t i = 0; i < count; ++i) {
        time += step * (below(20) == 0 ? 1 + below(300) : 1);
        store::StageReading reading{from_ms(time), below(400), static_cast<Quality>(below(5)), i + 2};
        if (below(15) == 0) reading = {reading.time, kMissing, Quality::missing, i + 2};
        const auto held = pair.model.find(time);
        if (!correct && held != pair.model.end()) {
          // Only what repeats may be given: the held reading in units of this series, else none.
          const std::int64_t unit = store::ticks_of(1, series.unit, series.decimals);
          const bool whole = held->second.ticks == kMissing || held->second.ticks % unit == 0;
          if (!whole) continue;
          reading.value = held->second.ticks == kMissing ? kMissing : held->second.ticks / unit;
          reading.quality = below(2) == 0 ? Quality::unchecked : held->second.quality;
        }
        series.readings.push_back(reading);
      }
      CAPTURE(round, correct);
      if (!correct) REQUIRE(pair.written().begin(head("look")).overlaps(series).empty());
      (void)pair.take(series, correct);
      check_equal(pair.book, pair.model, {});
    }
    for (const auto& [act, state] : pair.states) check_equal(pair.book, state, {act});
    check_origins(pair.book, pair.model, {});
    CHECK(pair.book.verify().empty());
  }
}

TEST_CASE("a closed month of over 32 pieces is merged by the next take, and says the same") {
  Pair pair;
  for (int day = 0; day < 33; ++day) {
    StageSeries made = series("2020-01-01T00:00Z", 12, 1000 + day * 20);
    for (auto& reading : made.readings) {
      reading.time += Millis(43'200'000LL * day);
      reading.quality = static_cast<Quality>(day % 5);
    }
    made.decimals = day < 20 ? 3 : 2;
    CHECK(pair.take(made, false).merged == 0);
  }
  CHECK(pair.take(series("2020-01-20T00:00Z", 3, 7, 60, 50), false).merged == 0);  // January is not over
  const std::int64_t before = pair.book.newest_act();
  const Model january = pair.model;
  const auto taken = pair.take(series("2020-02-01T00:00Z", 2, 5), false);
  CHECK(taken.merged == 1);
  CHECK(taken.pieces == 1);
  check_equal(pair.book, pair.model, {});
  check_origins(pair.book, pair.model, {});
  check_equal(pair.book, january, {before});
  CHECK(pair.book.verify().empty());
  const StageBlock block = pair.book.stage_block(kStation, utc_month_of(at("2020-01-01T00:00Z")));
  CHECK(block.pieces.size() == 3);  // one a run of equal decimals: 3, 2, and the last take's 3
  // The merged pieces alone decide the month: nothing of the older ones is read any more.
  const auto origin = pair.book.reading_origin(kStation, at("2020-01-05T01:00Z"));
  CHECK(origin->act == pair.book.file(origin->file)->act);
  CHECK(origin->act < before);
}

TEST_CASE("a merge alone makes no data version, and is not done twice") {
  Pair pair;
  for (int i = 0; i < 34; ++i) {
    (void)pair.take(series("2020-01-01T00:00Z", 1, 100 + i, 60, 2),
                    i > 0);  // the same time corrected again and again
  }
  const std::int64_t version = pair.book.data_version(kStation);
  CHECK(version == pair.book.newest_act());
  // A take that only repeats does nothing at all, not even a merge.
  CHECK(pair.take(series("2020-01-01T00:00Z", 1, 133), false).merged == 0);
  CHECK(pair.book.data_version(kStation) == version);
  CHECK(pair.take(series("2020-03-01T00:00Z", 1, 1), false).merged == 1);
  CHECK(pair.book.data_version(kStation) == pair.book.newest_act());
  CHECK(pair.take(series("2020-03-02T00:00Z", 1, 1), false).merged == 0);
  check_equal(pair.book, pair.model, {});
  check_origins(pair.book, pair.model, {});
  CHECK(pair.book.stage_block(kStation, utc_month_of(at("2020-01-01T00:00Z"))).pieces.size() == 1);
}

TEST_CASE("a merged month takes corrections and new pieces as any other") {
  Pair pair;
  for (int i = 0; i < 40; ++i) {
    StageSeries made = series("2020-01-01T00:00Z", 4, 100 + i, 15);
    for (auto& reading : made.readings) reading.time += Millis(3'600'000LL * 2 * i);
    (void)pair.take(made, false);
  }
  CHECK(pair.take(series("2020-02-01T00:00Z", 1, 1), false).merged == 1);
  (void)pair.take(series("2020-01-01T01:00Z", 3, 900), true);
  (void)pair.take(series("2020-01-20T00:00Z", 30, 500), false);
  check_equal(pair.book, pair.model, {});
  check_origins(pair.book, pair.model, {});
  for (const auto& [act, state] : pair.states) check_equal(pair.book, state, {act});
  CHECK(pair.book.verify().empty());
}
