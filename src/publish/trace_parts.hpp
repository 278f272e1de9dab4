#pragma once
// What the traces of an instant and of a day have in common.

#include <set>
#include <string>

#include "publish/recompute.hpp"
#include "publish/trace.hpp"

namespace scourbook::publish {

/// The publication that stands behind a trace, and the state of knowledge that is traced.
struct TracedState {
  history::View view;                             ///< with an edition
  std::optional<store::Publication> publication;  ///< whole; none where edition or data version was asked for
  store::Settings settings;
};
/// Throws StoreError refused where there is no edition.
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
/// Acts behind a curve: its own, its survey's, its gaugings'.
void add_acts(const store::Book& book, const std::string& station, const TracedCurve& traced,
              ActNumbers& acts);
/// Acts behind a state: edition, publication, replay.
void add_acts(const store::Book& book, const TracedState& state, ActNumbers& acts);

[[nodiscard]] std::string file_name(const store::Book& book, std::int64_t file);

}  // namespace scourbook::publish
