#pragma once
// A small book whose flows are worked out by hand: gauge zero 100 m, so that stage is depth; curves 1, 2 and
// 3 of 1, 2 and 10 m3/s per metre of depth. At 1 m depth the sd of ln Q is 0.05, so u95 is 10.3 %.

#include <string>
#include <vector>

#include "publish/publication.hpp"
#include "replay/replay.hpp"
#include "replay/station_book.hpp"

namespace small_book {

using namespace station_book;

inline RatingCurve proportional(double per_metre) {
  return curve({control(ControlKind::channel, 100, 1, per_metre)});
}

inline store::StageReading reading(const std::string& time, std::int64_t mm,
                                   Quality quality = Quality::unchecked) {
  return {at(time), mm, quality, 1};
}

/// Readings every `hours` in [from, until), depth in mm by `depth` of the hours since `from`.
template <class Depth>
std::vector<store::StageReading> readings(const std::string& from, const std::string& until, int hours,
                                          Depth depth) {
  std::vector<store::StageReading> all;
  std::int64_t line = 2, passed = 0;
  for (Instant time = at(from); time < at(until); time += std::chrono::hours(hours), passed += hours) {
    all.push_back({time, depth(passed), Quality::unchecked, line++});
  }
  return all;
}

struct SmallBook {
  explicit SmallBook(const std::vector<Period>& periods, std::vector<store::StageReading> stage,
                     const StationClock& clock = {}, const store::Settings& settings = {})
      : book(store::Book::create(path.text(), head("new"), settings)) {
    add_ground(book, clock, {zero("2020-01-01T00:00Z", 100)});
    add_curves(book, {proportional(1), proportional(2), proportional(10)});
    if (!periods.empty()) add_edition(book, periods);
    if (!stage.empty()) add_stage(book, std::move(stage));
  }

  /// Keeps a replay of the newest edition and data.
  store::ReplayRecord keep(const std::string& from, const std::string& until) {
    const auto replay = replay::make_replay(book, history::view_of(book, kStation), at(from), at(until));
    auto writer = book.begin(head("replay"));
    auto kept = writer.add_replay(replay);
    writer.commit();
    return kept;
  }
  /// Publishes a replay; its number.
  int publish(const store::ReplayRecord& replay) {
    auto made = publish::make_publication(book, replay);
    made.title = "figures";
    auto writer = book.begin(head("publish"));
    const int number = writer.add_publication(std::move(made)).number;
    writer.commit();
    return number;
  }
  int publish(const std::string& from, const std::string& until) { return publish(keep(from, until)); }
  void set(const store::Settings& settings) {
    auto writer = book.begin(head("settings"));
    writer.add_settings(settings);
    writer.commit();
  }

  TemporaryPath path{"publish-" + std::to_string(++count())};
  store::Book book;

 private:
  /// Several books may live at once in a test.
  static int& count() {
    static int number = 0;
    return number;
  }
};

inline store::Settings with_gap(std::int64_t minutes) {
  store::Settings settings;
  settings.longest_gap_minutes = minutes;
  return settings;
}

}  // namespace small_book
