#include "history/state.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>

namespace scourbook::history {
namespace {

constexpr std::array<std::string_view, 3> kStateWords{"proposed", "in force", "superseded"};

[[noreturn]] void refuse(const std::string& message) {
  throw store::StoreError(store::StoreError::Kind::refused, message);
}

Edition asked_edition(const store::Book& book, const std::string& station, int number, Known known) {
  std::optional<Edition> edition = book.edition(station, number);
  if (!edition) refuse(fmt::format("station {} has no edition {}", station, number));
  if (edition->act > known.act) {
    refuse(fmt::format("edition {} of station {} was not yet known then: act {} made it", number, station,
                       edition->act));
  }
  return *std::move(edition);
}

std::int64_t asked_data_version(const store::Book& book, const std::string& station, std::int64_t version,
                                Known known) {
  const std::int64_t at_or_before = version < 0 ? -1 : book.data_version(station, Known{version});
  if (at_or_before != version) {
    refuse(fmt::format("station {} has no data version {}{}", station, version,
                       at_or_before > 0 ? fmt::format("; the one before it is {}", at_or_before) : ""));
  }
  if (version > known.act) {
    refuse(fmt::format("data version {} of station {} was not yet known then", version, station));
  }
  return version;
}

}  // namespace

View view_of(const store::Book& book, const std::string& station, Known known, std::optional<int> edition,
             std::optional<std::int64_t> data_version) {
  if (!book.station(station, known)) refuse(fmt::format("there is no station {}", station));
  View view;
  view.station = station;
  view.known = known;
  view.edition =
      edition ? asked_edition(book, station, *edition, known) : book.newest_edition(station, known);
  view.data_version = data_version ? asked_data_version(book, station, *data_version, known)
                                   : book.data_version(station, known);
  return view;
}

std::string_view word(CurveState state) {
  return kStateWords.at(static_cast<std::size_t>(state));
}

CurveState state_of(int curve, const std::vector<Edition>& editions) {
  const auto uses = [curve](const Edition& edition) {
    return std::any_of(edition.periods.begin(), edition.periods.end(),
                       [curve](const Period& period) { return period.curve == curve; });
  };
  if (!editions.empty() && uses(editions.back())) return CurveState::in_force;
  return std::any_of(editions.begin(), editions.end(), uses) ? CurveState::superseded : CurveState::proposed;
}

}  // namespace scourbook::history
