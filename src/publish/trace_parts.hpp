#pragma once
// What the traces of an instant and of a day have in common.

#include <optional>
#include <set>
#include <string>
#include <vector>

#include "publish/recompute.hpp"
#include "publish/trace.hpp"

namespace scourbook::publish {

/// The publication that stands behind a trace, and the state of knowledge that is traced.
struct TracedState {
  history::View view;  ///< as asked, with an edition
  /// What the flows are computed from: `view`, but where a publication stands behind the trace settings and
  /// clock as known just before it was made.
  history::View made;
  std::optional<store::Publication> publication;  ///< whole; none where edition or data version was asked for
  store::Settings settings;                       ///< as known to `made`
  StationClock clock;                             ///< as known to `made`
};
/// Throws StoreError refused where there is no edition, damaged where a publication has lost its replay.
[[nodiscard]] TracedState state_of(const store::Book& book, const TraceRequest& request);

/// Numbers of acts on their way into a trace.
class ActNumbers {
 public:
  void add(std::int64_t act) {
    if (act > 0) numbers_.insert(act);
  }
  [[nodiscard]] std::vector<Act> load(const store::Book& book) const;

 private:
  std::set<std::int64_t> numbers_;
};

/// Fills survey file, source and reasons of a traced curve.
void complete(const store::Book& book, const history::View& view, TracedCurve& traced);
/// Acts behind a curve: its own, those of its surveys, reach rows and gaugings.
void add_acts(const store::Book& book, const RatingCurve& curve, std::int64_t curve_act, ActNumbers& acts);
/// Acts behind a state: edition, publication, replay.
void add_acts(const store::Book& book, const TracedState& state, ActNumbers& acts);
/// Acts behind the levels of [from, until]: gauge zeros in force and stage corrections.
void add_level_acts(const store::Book& book, const history::View& view, Instant from, Instant until,
                    ActNumbers& acts);

/// Both or neither, and the same to the last bit.
[[nodiscard]] bool same_bits(const std::optional<double>& a, const std::optional<double>& b);
[[nodiscard]] std::string file_name(const store::Book& book, std::int64_t file);

}  // namespace scourbook::publish
