#pragma once
// Collects from the book what a derivation needs, and applies the parent rules.

#include <optional>
#include <string>
#include <vector>

#include "rederivation/derive.hpp"
#include "store/book.hpp"

namespace scourbook::history {

struct DerivationRequest {
  std::string station;
  std::string survey;
  Instant from{};
  std::optional<Instant> until;
  std::optional<int> descends_from;
  bool first = false;  ///< starts a new lineage
  rederivation::Options options;
};

struct DerivationInput {
  std::vector<std::string> refusals;  ///< rules of the parent, missing records; in words, with the way on
  std::vector<std::string> notes;     ///< how the parent was chosen, where that is not plain
  rederivation::Input input;          ///< complete when there are no refusals
};

/// Everything as known. Times in the texts are in the station's offset.
///
/// Reach rows: those in force at `from` (reach_in_force). Gaugings: those whose middle lies in [from, until),
/// each with the level of its mean stage under gauge zero and corrections at that middle; the ones to be left
/// out are among them.
///
/// Parent: `descends_from` (a proposal may be one); else the curve in force just before `from`, where periods
/// without a curve and gaps are looked past, never one whose period starts at `from`; else a first curve.
/// Refused where it has another form, or where it or an ancestor used a gauging that this derivation would
/// use: a gauging counts once (with `without_gaugings`: one inside the new period, since the curve was not
/// free of it).
///
/// Throws StoreError refused for an unknown station.
[[nodiscard]] DerivationInput collect(const store::Book& book, const DerivationRequest& request,
                                      Known known = {});

/// The rows in force at `time`, out of rows by valid_from: section, channel, then overbank by cross-section
/// and part. Section and channel: the newest rows of their kind, even where they name another cross-section
/// than before (two of one time are both returned). Overbank: the newest of each cross-section and part,
/// without those on a cross-section that the channel has left since.
[[nodiscard]] std::vector<rederivation::ReachInput> reach_in_force(
    const std::vector<store::Book::ReachId>& rows, Instant time);

/// The number of the curve that a derivation from `from` descends from by default; nothing where none was in
/// force before.
[[nodiscard]] std::optional<int> default_parent(const Edition& edition, Instant from);

}  // namespace scourbook::history
